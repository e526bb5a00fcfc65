/** The accounts of a demo site. The people are invented; their passwords are shown on its sign-in page. */
export const demoAccounts = [
  {
    role: 'student',
    name: 'Kofi Adeyemi',
    email: 'student@lab.test',
    password: 'two-coils-one-beam',
    does: 'measures on benches 1 to 3',
  },
  {
    role: 'student',
    name: 'Runa Lindqvist',
    email: 'partner@lab.test',
    password: 'read-both-edges',
    does: 'reads the same beam',
  },
  {
    role: 'instructor',
    name: 'Mina Oyelaran',
    email: 'instructor@lab.test',
    password: 'lights-off-please',
    does: 'teaches the practical',
  },
  {
    role: 'technician',
    name: 'Pat Vance',
    email: 'technician@lab.test',
    password: 'prove-it-dead-first',
    does: 'keeps the benches',
  },
] satisfies {
  role: 'student' | 'instructor' | 'technician'
  name: string
  email: string
  password: string
  does: string
}[]
