/** Values as the sentences state them: no trailing zeros, and no more digits than a reader can use. */

function rounded(value: number, decimals: number): string {
  const text = value.toFixed(decimals)
  const short = text.includes('.') ? text.replace(/\.?0+$/, '') : text
  return short === '-0' ? '0' : short
}

export const inVolts = (volts: number): string => `${rounded(volts, 1)} V`
export const inAmps = (amps: number): string => `${rounded(amps, 3)} A`
export const inMilliamps = (amps: number): string => `${rounded(amps * 1000, 1)} mA`
export const inCelsius = (celsius: number): string => `${rounded(celsius, 1)} °C`
export const inSeconds = (seconds: number): string => `${rounded(seconds, 1)} s`

/** 'a', 'a and b', 'a, b and c'. */
export function listed(words: readonly string[]): string {
  if (words.length < 2) return words[0] ?? ''
  return `${words.slice(0, -1).join(', ')} and ${words[words.length - 1]}`
}

/** The sentence with a capital at its head. */
export const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1)

/** A voltage measured longer ago than this says nothing of now. */
const knownSeconds = 5

/**
 * What is known of the anode's voltage after an off command, in words. The software never calls a bench safe:
 * it says what was commanded, what was measured, and when.
 */
export function anodeKnowledge(measured: { volts: number; at: number } | null, now: number): string {
  if (measured === null) return 'off commanded, voltage unknown: treat as live'
  const age = Math.max(0, now - measured.at)
  if (age > knownSeconds) {
    return `off commanded, voltage unknown: treat as live (${inVolts(measured.volts)} was measured ${inSeconds(age)} ago)`
  }
  return `off commanded, ${inVolts(measured.volts)} measured ${inSeconds(age)} ago`
}
