import type { Command } from '#app/protocol/commands.ts'
import type { Actor, Output, Refusal } from '#app/safety/types.ts'
import { inAmps, inVolts } from '#app/safety/words.ts'
import type { Bench } from './bench.ts'
import { InstrumentRefusedError, LineError } from './instruments/line-errors.ts'
import { type Outputs, OvertakenError } from './outputs.ts'

/** Carries out a command that nothing speaks against. Resolves with what was done, in a sentence. */
export async function execute(bench: Bench, actor: Actor, command: Command): Promise<string> {
  const { controls } = bench
  const said = (kind: 'controls' | 'command' | 'reset', sentence: string) => {
    bench.report({ kind, actor, sentence, data: { command } })
    return sentence
  }
  switch (command.kind) {
    case 'make-safe':
      return bench.makeSafe(`${actor.name} asked for make safe.`, actor)
    case 'take-controls':
      if (controls.holder?.personId === actor.personId) return 'You are at the controls already.'
      controls.take(actor)
      return said('controls', `${actor.name} took the controls.`)
    case 'take-over': {
      const from = controls.holder
      if (from?.personId === actor.personId) return 'You are at the controls already.'
      controls.take(actor)
      return said(
        'controls',
        from === null
          ? `${actor.name} took the controls.`
          : `${actor.name} took the controls over from ${from.name}.`,
      )
    }
    case 'hand-over':
      controls.take({
        personId: command.toPersonId,
        name: command.toName,
        role: command.toRole,
        acknowledged: command.toAcknowledged,
      })
      return said('controls', `${actor.name} handed the controls to ${command.toName}.`)
    case 'release-controls':
      return release(bench, actor, said)
    case 'reset-trip': {
      const kind = bench.machine.trip?.kind ?? 'none'
      bench.reset()
      return said('reset', `${actor.name} reset the trip (${kind}). Nothing was switched on.`)
    }
    case 'switch-heater':
      return said('command', await switchHeater(bench, outputsOf(bench), command.on))
    case 'set-anode':
      await outputsOf(bench).set('anode', command.volts ?? 0)
      return said('command', `Anode setpoint ${inVolts(command.volts ?? 0)}.`)
    case 'set-coils':
      await outputsOf(bench).set('coils', command.amps ?? 0)
      return said('command', `Coil setpoint ${inAmps(command.amps ?? 0)}.`)
    case 'set-polarity':
      return said('command', setPolarity(bench, actor, command.polarity))
  }
}

/** What went wrong on the way to the instrument, as a refusal. */
export function refusalOfError(error: unknown): Refusal {
  if (error instanceof InstrumentRefusedError) {
    return {
      code: 'instrument-refused',
      sentence: `The supply refused it: ${error.number} ${error.text}. Check the supply and its interlock.`,
    }
  }
  if (error instanceof OvertakenError || (error instanceof LineError && error.fault === 'overtaken')) {
    return { code: 'busy', sentence: 'The outputs were taken down while this was under way.' }
  }
  if (error instanceof LineError) {
    return {
      code: 'line-lost',
      sentence: `The supply did not confirm it (${error.message}): see what is measured before you go on.`,
    }
  }
  throw error
}

/** Whether it would bring something up, or take away what keeps it down. */
export function bringsUp(command: Command): boolean {
  switch (command.kind) {
    case 'switch-heater':
      return command.on
    case 'set-anode':
      return command.volts !== 0
    case 'set-coils':
      return command.amps !== 0
    default:
      return command.kind === 'set-polarity' || command.kind === 'reset-trip'
  }
}

function wordsOfError(error: unknown): string {
  try {
    return refusalOfError(error).sentence
  } catch {
    return `The bridge failed at it: ${String(error)}.`
  }
}

function outputsOf(bench: Bench): Outputs {
  if (bench.apparatus === null) throw new Error(`${bench.benchId} has no apparatus`)
  return bench.apparatus.outputs
}

/** With nobody at the controls nothing stays on. */
async function release(
  bench: Bench,
  actor: Actor,
  said: (kind: 'controls', sentence: string) => string,
): Promise<string> {
  const wasOn = bench.apparatus?.outputs.anyOn === true
  bench.controls.release()
  const sentence = said('controls', `${actor.name} released the controls.`)
  if (!wasOn) return sentence
  return `${sentence} ${await bench.makeSafe('The controls were released with an output on.', actor)}`
}

async function switchHeater(bench: Bench, outputs: Outputs, on: boolean): Promise<string> {
  if (on) {
    if (outputs.views.heater.on) return 'The heater is on already.'
    await outputs.switchHeater(true)
    return 'Heater on.'
  }
  // A cathode without its heater must not carry an anode voltage.
  if (outputs.views.anode.on) {
    const { supply } = bench.apparatus?.instruments ?? {}
    // A change of polarity ends with this, whatever it was at: the coils are not to be on between two polarities.
    const down: Output[] = outputs.polarityChanging ? ['anode', 'coils'] : ['anode']
    outputs.drop(down)
    await Promise.all(down.map((output) => supply?.switchOutput(output, false, { urgent: true })))
    const { coils } = outputs.views
    if (coils.on) await outputs.set('coils', coils.asked)
    await outputs.switchHeater(false)
    return 'Anode off, heater off.'
  }
  await outputs.switchHeater(false)
  return 'Heater off.'
}

function setPolarity(bench: Bench, actor: Actor, polarity: 1 | -1): string {
  const outputs = outputsOf(bench)
  const word = polarity === 1 ? 'normal' : 'reversed'
  if (outputs.polarity === polarity) return `The coil polarity is ${word} already.`
  outputs
    .changePolarity(polarity)
    .catch((error: unknown) => wordsOfError(error))
    .then((done) => {
      if (done === true) {
        bench.report({
          kind: 'command',
          actor,
          sentence: `The coil polarity is now ${word}.`,
          data: { polarity },
        })
      } else {
        const why =
          typeof done === 'string' ? done : 'Anode and coils were not read as zero, or were taken down.'
        bench.report({
          kind: 'warning',
          sentence: `The coil polarity was not changed. ${why}`,
          data: { polarity },
        })
      }
      bench.changed(true)
    })
  return `The coil polarity is being changed to ${word}: anode and coils go to zero first.`
}
