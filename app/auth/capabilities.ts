import type { Role } from '../safety/types.ts'

/**
 * Who may do what: one table for loaders, actions, navigation and the bridge's tickets.
 * Ownership (of which class, whose run) is in each query besides.
 */
const table = {
  'watch-all-benches': ['technician', 'instructor'],
  'watch-class-benches': ['student'],
  'take-controls': ['technician', 'instructor', 'student'],
  'take-over': ['technician', 'instructor'],
  'make-bench-safe': ['technician', 'instructor', 'student'],
  'make-room-safe': ['technician', 'instructor'],
  'reset-trip': ['technician', 'instructor', 'student'],
  'reset-every-trip': ['technician'],
  capture: ['technician', 'instructor', 'student'],
  'import-readings': ['technician', 'instructor', 'student'],
  'strike-any-reading': ['technician', 'instructor'],
  'read-runs': ['technician', 'instructor'],
  'see-accepted-value': ['technician', 'instructor'],
  commission: ['technician'],
  'see-all-events': ['technician'],
  accounts: ['technician'],
} as const satisfies Record<string, readonly Role[]>

export type Capability = keyof typeof table
export const capabilities = Object.keys(table) as Capability[]

export function may(role: Role, capability: Capability): boolean {
  return (table[capability] as readonly Role[]).includes(role)
}
