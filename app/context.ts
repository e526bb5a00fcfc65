import { createContext } from 'react-router'
import type { Database } from './db/client.server.ts'
import type { Role } from './safety/types.ts'

export type Person = {
  id: string
  name: string
  email: string
  role: Exclude<Role, 'guest'>
  roomLight: 'lit' | 'dark'
  sessionId: string
}

/** The person signed in. Set by the guard of `routes/signed-in.tsx`; reading it elsewhere throws. */
export const personContext = createContext<Person>()
export const databaseContext = createContext<Database>()
/** Set by the root's middleware; null for a request that comes to no route. */
export const nonceContext = createContext<string | null>(null)
