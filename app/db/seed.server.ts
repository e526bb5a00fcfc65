import { pathToFileURL } from 'node:url'
import { hashPassword } from '../auth/password.server.ts'
import { type Database, write } from './client.server.ts'
import { demoAccounts } from './demo-accounts.server.ts'
import { demoBenches, demoTypedBench } from './demo-benches.ts'
import { benches, benchRevisions, classBenches, classes, classMembers, people } from './schema.ts'
import { siteDatabase } from './site.server.ts'

const commissioned = [...demoBenches, demoTypedBench]

/**
 * Fills an empty database with the demo site: its accounts, one class, three virtual benches and one without ports. Leaves
 * any other as it is.
 */
export async function seedDemo(db: Database): Promise<'seeded' | 'left as it was'> {
  if (await db.query.people.findFirst()) return 'left as it was'
  const accounts = await Promise.all(
    demoAccounts.map(async ({ name, email, role, password }) => ({
      name,
      email,
      role,
      passwordHash: await hashPassword(password),
    })),
  )
  await write(db, async (tx) => {
    const persons = await tx.insert(people).values(accounts).returning({ id: people.id, role: people.role })
    const technician = persons.find((person) => person.role === 'technician')
    await tx
      .insert(benches)
      .values(commissioned.map(({ benchId, name, place }) => ({ id: benchId, name, place })))
    await tx.insert(benchRevisions).values(
      commissioned.map((config) => ({
        benchId: config.benchId,
        revision: config.revision,
        config,
        personId: technician?.id ?? null,
        note: 'First commissioning',
      })),
    )
    const [practical] = await tx
      .insert(classes)
      .values({ name: 'Practical, group A' })
      .returning({ id: classes.id })
    if (!practical) throw new Error('The class was not stored')
    const members = persons.filter((person) => person.role !== 'technician')
    await tx.insert(classMembers).values(members.map(({ id }) => ({ classId: practical.id, personId: id })))
    await tx
      .insert(classBenches)
      .values(commissioned.map(({ benchId }) => ({ classId: practical.id, benchId })))
  })
  return 'seeded'
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href)
  console.log(`Demo site: ${await seedDemo(await siteDatabase())}.`)
