import type { BenchState } from '#app/protocol/messages.ts'
import { fixed, thinSpace } from '../figures.ts'

type Input = {
  setpoint: BenchState['anode']
  measured: number | null
  /** The largest disagreement of setpoint and meter that counts as reached. */
  tolerance: number
  unit: string
  decimals: number
}

/** Asked, ramping or reached, in the few words that fit beside the field. */
export function setpointProgress({ setpoint, measured, tolerance, unit, decimals }: Input): string {
  const show = (value: number) => `${fixed(value, decimals)}${thinSpace}${unit}`
  if (!setpoint.on && setpoint.asked === 0) return 'off'
  if (!setpoint.on) return `${show(setpoint.asked)} asked, output off`
  if (Math.abs(setpoint.commanded - setpoint.asked) > 1e-9)
    return `ramping, ${fixed(setpoint.commanded, decimals)} of ${show(setpoint.asked)}`
  if (measured === null) return `${show(setpoint.asked)} commanded, not measured`
  return Math.abs(measured - setpoint.asked) <= tolerance
    ? `${show(setpoint.asked)} reached`
    : `${show(setpoint.asked)} commanded, not reached`
}
