/** What a stored command asked, in words: for the log, where the row keeps what was asked as it was asked. */
export function commandWords(kind: string, asked: Record<string, unknown>): string {
  switch (kind) {
    case 'take-controls':
      return 'Take the controls'
    case 'take-over':
      return 'Take over the controls'
    case 'hand-over':
      return `Hand the controls to ${String(asked.toName)}`
    case 'release-controls':
      return 'Release the controls'
    case 'switch-heater':
      return `Heater ${asked.on === true ? 'on' : 'off'}`
    case 'set-anode':
      return `Anode to ${String(asked.volts)} V`
    case 'set-coils':
      return `Coils to ${String(asked.amps)} A`
    case 'set-polarity':
      return `Coil polarity ${asked.polarity === -1 ? 'reversed' : 'normal'}`
    case 'reset-trip':
      return 'Reset the trip'
    case 'make-safe':
      return 'Make safe'
    case 'make-room-safe':
      return 'Make the room safe'
    default:
      return kind
  }
}
