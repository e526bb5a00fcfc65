import { hash, verify } from '@node-rs/argon2'

/** OWASP's minimum for argon2id: 19 MiB, two passes, one lane. The package's default algorithm is argon2id. */
const options = { memoryCost: 19_456, timeCost: 2, parallelism: 1 }

export const hashPassword = (password: string) => hash(password, options)

let decoy: Promise<string> | undefined

/** True when the password belongs to the hash. With no hash it takes as long, so that an unknown account cannot be told by time. */
export async function passwordMatches(passwordHash: string | undefined, password: string): Promise<boolean> {
  if (passwordHash !== undefined) return verify(passwordHash, password)
  decoy ??= hashPassword(crypto.randomUUID())
  await verify(await decoy, password)
  return false
}
