/** The part of a structured logger that the bridge uses. */
export type Log = Record<'info' | 'warn' | 'error', (fields: object, message: string) => void>
