import type { Server } from 'node:net'

/** An address as it is written: `host:port`, `:port`, or the path of a Unix socket. */
export type Address = string

/** Listens and answers with the address in the same form, with the real port where 0 was asked for. */
export async function listenAt(server: Server, address: Address): Promise<Address> {
  const match = /^([^/]*):(\d+)$/.exec(address)
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject)
    const done = () => {
      server.off('error', reject)
      resolve()
    }
    if (match) server.listen({ host: match[1] || '127.0.0.1', port: Number(match[2]) }, done)
    else server.listen(address, done)
  })
  const bound = server.address()
  if (bound === null || typeof bound === 'string') return address
  return `${match?.[1] || '127.0.0.1'}:${bound.port}`
}

/** Options for `net.connect`. */
export function connectOptions(address: Address): { host: string; port: number } | { path: string } {
  const match = /^([^/]*):(\d+)$/.exec(address)
  return match ? { host: match[1] || '127.0.0.1', port: Number(match[2]) } : { path: address }
}
