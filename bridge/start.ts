import { type Output, outputs } from '#app/safety/types.ts'
import { capital, listed } from '#app/safety/words.ts'
import type { Apparatus } from './apparatus.ts'

import { wait } from './clock.ts'
import type { Report } from './guard.ts'

const retrySeconds = 0.5
const mostReadings = 3

/**
 * Before anything else on a line that has just been opened: every output commanded off and read back as off, and the
 * supply's own protection set. Tried until it succeeds or the line is lost again. Tells what the supply still held.
 */
export async function prepareSupply(apparatus: Apparatus, report: (report: Report) => void): Promise<void> {
  const { supply } = apparatus.instruments
  const opening = apparatus.supplyOpenings
  const isSame = () => supply.status === 'open' && apparatus.supplyOpenings === opening
  const found: Record<Output, number | null> = { heater: null, anode: null, coils: null }
  // A voltage that falls fast may be null for a reading or two.
  for (let reading = 0; reading < mostReadings && found.anode === null; reading++) {
    const measured = await supply.measure().catch(() => null)
    found.heater ??= measured?.heater.volts ?? null
    found.anode = measured?.anode.volts ?? null
    found.coils ??= measured?.coils.amps ?? null
  }
  const held = outputs.filter((output) => isHeld(output, found[output]))
  let isReported = false
  while (isSame()) {
    try {
      await apparatus.outputs.prepare()
      if (!isSame()) return
      apparatus.prepared = true
      const before = held.length === 0 ? '' : ` ${capital(listed(held))} still held a value from before.`
      report({
        kind: 'start',
        sentence: `Every output was commanded off and read back as off.${before}`,
        data: { held, found },
      })
      return
    } catch (error) {
      if (!isReported) {
        report({
          kind: 'warning',
          sentence: `The outputs could not be read back as off (${error instanceof Error ? error.message : String(error)}): treat the tube as live. It is tried again.`,
        })
        isReported = true
      }
      await wait(retrySeconds)
    }
  }
}

/** More than noise, so soon after the off command that opens a line: the output was on. */
function isHeld(output: Output, value: number | null): boolean {
  if (value === null) return false
  return Math.abs(value) > { heater: 0.3, anode: 2, coils: 0.05 }[output]
}
