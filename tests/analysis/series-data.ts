import type { SeriesReading } from '#app/analysis/series-model.ts'
import classReadings from './data/class-readings.json'
import { gaussian } from './random.ts'

const { data, expected } = classReadings.cases.class_24

/** 24 readings taken by students on a real bench, from a public repository; the source stands in the file. */
export const classSeries: SeriesReading[] = data.V.map((voltageVolts, i) => ({
  voltageVolts,
  currentAmps: data.I_A[i] as number,
  diameterMetres: (data.d_cm[i] as number) / 100,
  uVoltage: data.u_V,
  uCurrent: data.u_I_A,
  uDiameter: data.u_d_cm / 100,
}))
export const classField = { teslaPerAmp: expected.field_factor_T_per_A }

export const simulatedField = { teslaPerAmp: 7.4e-4 }
export const simulatedConstant = 1.7588e11

type Truth = { strayFieldTesla: number; voltageOffsetVolts: number; scaleOffsetMetres: number }
type Simulation = {
  truth: Truth
  settings: readonly { volts: number; amps: number; polarity: 1 | -1 }[]
  uVoltage: number
  uCurrent: number
  uDiameter: number
}

/** Readings of a bench whose stray field and offsets are known, each off by chance as its uncertainties say. */
export function simulate(
  { truth, settings, uVoltage, uCurrent, uDiameter }: Simulation,
  noise: ReturnType<typeof gaussian>,
): SeriesReading[] {
  return settings.map(({ volts, amps, polarity }) => {
    const speed = Math.sqrt(2 * (volts - truth.voltageOffsetVolts) * simulatedConstant)
    const field = simulatedField.teslaPerAmp * amps + polarity * truth.strayFieldTesla
    return {
      voltageVolts: volts + uVoltage * noise(),
      currentAmps: amps + uCurrent * noise(),
      diameterMetres:
        (2 * speed) / (simulatedConstant * field) + truth.scaleOffsetMetres + uDiameter * noise(),
      uVoltage,
      uCurrent,
      uDiameter,
      polarity,
    }
  })
}

/** Voltages and currents in turn; the second half of them reversed if asked. */
export function settingsOf(count: number, volts: number[], amps: number[], isReversed: boolean) {
  return Array.from({ length: count }, (_, i) => ({
    volts: volts[i % volts.length] as number,
    amps: amps[i % amps.length] as number,
    polarity: (isReversed && i >= count / 2 ? -1 : 1) as 1 | -1,
  }))
}

export { gaussian }
