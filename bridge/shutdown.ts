import type { Output } from '#app/safety/types.ts'
import { anodeKnowledge, capital, listed } from '#app/safety/words.ts'
import { within } from './clock.ts'
import type { Supply } from './instruments/types.ts'

/** All steps are sent, and answered or not, within this. */
const shutdownSeconds = 0.9

export type ShutdownStep = { output: Output; confirmed: boolean }

/**
 * Commands the outputs off, in the order given and ahead of everything queued. Each step is sent whether or not the
 * one before was confirmed; confirmed is what the supply then reports as off. Resolves within a second.
 */
export async function shutDown(supply: Supply | null, order: readonly Output[]): Promise<ShutdownStep[]> {
  const steps = order.map(async (output): Promise<ShutdownStep> => {
    if (supply === null) return { output, confirmed: false }
    const confirmed = supply
      .switchOutput(output, false, { urgent: true })
      .then(() => supply.isOn(output))
      .then(
        (on) => on === false,
        () => false,
      )
    return { output, confirmed: await within(shutdownSeconds, confirmed, false) }
  })
  return Promise.all(steps)
}

/** Brings the setpoints of outputs that are off to zero as well. Nothing depends on it. */
export function clearSetpoints(supply: Supply | null): void {
  for (const sent of [supply?.setVolts('anode', 0), supply?.setAmps('coils', 0)]) sent?.catch(() => undefined)
}

export const nothingCommanded =
  'Nothing could be commanded: no supply of this bench is known here. Anode: voltage unknown: treat as live.'

/** What was commanded and what came of it, in words; names what was not confirmed. */
export function shutdownSentence(
  steps: readonly ShutdownStep[],
  measured: { volts: number; at: number } | null,
  now: number,
): string {
  const open = steps.filter(({ confirmed }) => !confirmed).map(({ output }) => output)
  const commanded = `${capital(listed(steps.map(({ output }) => output)))} commanded off.`
  const unconfirmed = open.length === 0 ? '' : ` Not confirmed: ${listed(open)}.`
  return `${commanded}${unconfirmed} Anode: ${anodeKnowledge(measured, now)}.`
}
