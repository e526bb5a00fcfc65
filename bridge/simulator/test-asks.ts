import * as z from 'zod'
import { type InstrumentName, instrumentNames, type SimulatedBench } from './bench.ts'
import { lineDefaults, lineModes } from './line-modes.ts'
import { faultDefaults, faultNames } from './model/faults.ts'
import type { SerialLine } from './serial-line.ts'

const id = z.union([z.number(), z.string()])
const bench = z.string()

export const askSchema = z.discriminatedUnion('ask', [
  z.object({ id, bench, ask: z.literal('terminal') }),
  z.object({ id, bench, ask: z.literal('setpoints') }),
  z.object({ id, bench, ask: z.literal('turning-points') }),
  z.object({ id, bench, ask: z.literal('e-stop'), in: z.boolean() }),
  z.object({ id, bench, ask: z.literal('enclosure'), open: z.boolean() }),
  z.object({
    id,
    bench,
    ask: z.literal('fault'),
    name: z.enum(faultNames),
    on: z.boolean(),
    value: z.number().optional(),
  }),
  z.object({
    id,
    bench,
    ask: z.literal('line'),
    instrument: z.enum(instrumentNames),
    mode: z.enum(lineModes),
    milliseconds: z.number().nonnegative().optional(),
    value: z.number().nonnegative().optional(),
  }),
  z.object({ id, bench, ask: z.literal('set'), coilCelsius: z.number().min(-40).max(300).optional() }),
  z.object({ id, bench, ask: z.literal('truth') }),
  z.object({ id, bench, ask: z.literal('power-cycle') }),
])
export type Ask = z.infer<typeof askSchema>

/** Does what a test asks of a bench and answers with what it wanted to know; null where there is nothing to say. */
export function answerAsk(
  ask: Ask,
  bench: SimulatedBench,
  lineOf: (instrument: InstrumentName) => SerialLine,
): unknown {
  const { model } = bench
  switch (ask.ask) {
    case 'terminal':
      return {
        anodeVolts: model.anodeVolts,
        coilAmps: model.signedCoilAmps,
        heaterVolts: model.heaterVolts,
        atSeconds: model.seconds,
      }
    case 'setpoints': {
      const { heater, anode, coils } = model.outputs
      return {
        anodeVolts: anode.volts,
        coilAmps: coils.amps,
        heaterVolts: heater.volts,
        on: { heater: heater.isOn, anode: anode.isOn, coils: coils.isOn },
      }
    }
    case 'turning-points':
      return bench.orbit()?.turningPoints ?? { leftMetres: null, rightMetres: null }
    case 'e-stop':
      model.setEStop(ask.in)
      return null
    case 'enclosure':
      model.setEnclosure(ask.open)
      return null
    case 'fault':
      if (ask.on) model.faults.set(ask.name, ask.value ?? faultDefaults[ask.name])
      else model.faults.delete(ask.name)
      return null
    case 'line':
      lineOf(ask.instrument).set({
        mode: ask.mode,
        value: ask.milliseconds ?? ask.value ?? lineDefaults[ask.mode],
      })
      return null
    case 'set':
      if (ask.coilCelsius !== undefined) model.coilCelsius = ask.coilCelsius
      return null
    case 'truth':
      return { ...bench.scenario, coilCelsius: model.coilCelsius, cathodeKelvin: model.filament.kelvin }
    case 'power-cycle':
      bench.powerCycle()
      for (const instrument of instrumentNames) lineOf(instrument).set({ mode: 'good', value: 0 })
      return null
  }
}
