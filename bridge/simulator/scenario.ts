import { acceptedChargeToMass } from '#app/physics/accepted-value.ts'
import type { CoilPair } from '#app/physics/coil-field.ts'
import type { Vector } from '#app/physics/orbit.ts'
import type { Output } from '#app/safety/types.ts'

/** How well one quantity is set or read. Offsets, steps and noise in its own unit; gain as a part of the value. */
export type Quality = {
  /** Largest gain and offset error; the actual one is drawn from the seed inside it and stays. */
  gainError: number
  offsetError: number
  noise: number
  /** Size of the last digit; 0 for none. */
  step: number
}

export type OutputScenario = {
  voltsRange: number
  ampsRange: number
  setVolts: Quality
  setAmps: Quality
  readVolts: Quality
  readAmps: Quality
  /** First-order times of the regulated quantity, upwards and downwards. */
  riseSeconds: number
  fallSeconds: number
  /** Peak of the mains ripple, and standard deviation of the slow drift, of the regulated quantity. */
  ripple: number
  drift: number
}

export type MeterScenario = {
  range: number
  reading: Quality
  /** An error of zero that the data sheet does not cover. */
  offset: number
  settlingSeconds: number
}

/** What one bench truly is. SI units; z is the coil axis, x right, y up, seen from +z. */
export type BenchScenario = {
  benchId: string
  chargeToMass: number
  coilPair: CoilPair
  strayFieldTesla: Vector
  gun: { x: number; y: number; direction: { x: number; y: number } }
  bulbRadiusMetres: number
  glowWidthMetres: number
  scale: { distanceBehindMetres: number; eyeDistanceMetres: number }
  coils: {
    ohms: number
    celsius: number
    kelvinPerWatt: number
    timeConstantSeconds: number
    ambientCelsius: number
  }
  outputs: Record<Output, OutputScenario>
  anodeMeter: MeterScenario
  coilMeter: MeterScenario
}

export type Scenario = { benches: BenchScenario[] }

const heaterOutput: OutputScenario = {
  voltsRange: 8,
  ampsRange: 2,
  setVolts: { gainError: 0.001, offsetError: 0.005, noise: 0, step: 0.001 },
  setAmps: { gainError: 0.001, offsetError: 0.005, noise: 0, step: 0.001 },
  readVolts: { gainError: 0.001, offsetError: 0.003, noise: 0.001, step: 0.001 },
  readAmps: { gainError: 0.001, offsetError: 0.002, noise: 0.001, step: 0.001 },
  riseSeconds: 0.02,
  fallSeconds: 0.05,
  ripple: 0.002,
  drift: 0.002,
}

const anodeOutput: OutputScenario = {
  voltsRange: 350,
  ampsRange: 0.02,
  setVolts: { gainError: 0.0005, offsetError: 0.1, noise: 0, step: 0.01 },
  setAmps: { gainError: 0.002, offsetError: 0.00002, noise: 0, step: 0.00001 },
  readVolts: { gainError: 0.001, offsetError: 0.1, noise: 0.03, step: 0.01 },
  readAmps: { gainError: 0.002, offsetError: 0.000005, noise: 0.000002, step: 0.000001 },
  riseSeconds: 0.02,
  fallSeconds: 0.08,
  ripple: 0.1,
  drift: 0.02,
}

const coilOutput: OutputScenario = {
  voltsRange: 30,
  ampsRange: 3.5,
  setVolts: { gainError: 0.001, offsetError: 0.005, noise: 0, step: 0.001 },
  setAmps: { gainError: 0.001, offsetError: 0.001, noise: 0, step: 0.0001 },
  readVolts: { gainError: 0.0005, offsetError: 0.0003, noise: 0.0003, step: 0.0001 },
  readAmps: { gainError: 0.0005, offsetError: 0.0001, noise: 0.0001, step: 0.0001 },
  riseSeconds: 0.05,
  fallSeconds: 0.05,
  ripple: 0.0005,
  drift: 0.0001,
}

const shared = {
  chargeToMass: acceptedChargeToMass.value,
  glowWidthMetres: 0.0012,
  outputs: { heater: heaterOutput, anode: anodeOutput, coils: coilOutput },
  coilMeter: {
    range: 5,
    reading: { gainError: 0.002, offsetError: 0.0003, noise: 0.0002, step: 0.0001 },
    offset: 0,
    settlingSeconds: 0.05,
  },
}

function anodeMeter(offset: number): MeterScenario {
  return {
    range: 600,
    reading: { gainError: 0.001, offsetError: 0.02, noise: 0.04, step: 0.01 },
    offset,
    settlingSeconds: 0.05,
  }
}

function pairOf(coil: CoilPair['coils'][0], separationMetres: number): CoilPair {
  return { coils: [coil, { ...coil }], separationMetres }
}

const up = { x: 0, y: 1 }

/** The three benches of the demo site. */
export const demoScenario: Scenario = {
  benches: [
    {
      ...shared,
      benchId: 'bench-1',
      coilPair: pairOf({ turns: 130, radiusMetres: 0.15 }, 0.15),
      strayFieldTesla: { x: 0, y: 0, z: 0 },
      gun: { x: 0.041, y: 0, direction: up },
      bulbRadiusMetres: 0.08,
      scale: { distanceBehindMetres: 0, eyeDistanceMetres: 0.6 },
      coils: { ohms: 4.3, celsius: 21, kelvinPerWatt: 1.8, timeConstantSeconds: 900, ambientCelsius: 21 },
      anodeMeter: anodeMeter(0),
    },
    {
      ...shared,
      benchId: 'bench-2',
      coilPair: pairOf({ turns: 154, radiusMetres: 0.2 }, 0.2),
      strayFieldTesla: { x: 12e-6, y: -5e-6, z: 28e-6 },
      gun: { x: 0, y: 0, direction: up },
      bulbRadiusMetres: 0.085,
      scale: { distanceBehindMetres: 0.08, eyeDistanceMetres: 0.6 },
      coils: { ohms: 5.1, celsius: 21, kelvinPerWatt: 1.75, timeConstantSeconds: 930, ambientCelsius: 21 },
      anodeMeter: anodeMeter(0.6),
    },
    {
      ...shared,
      benchId: 'bench-3',
      coilPair: pairOf(
        { turns: 124, radiusMetres: 0.147, windingWidthMetres: 0.02, windingDepthMetres: 0.018 },
        0.15,
      ),
      strayFieldTesla: { x: -6e-6, y: 9e-6, z: -18e-6 },
      gun: { x: 0.03, y: 0, direction: up },
      bulbRadiusMetres: 0.078,
      scale: { distanceBehindMetres: 0, eyeDistanceMetres: 0.6 },
      coils: { ohms: 3.8, celsius: 21, kelvinPerWatt: 1.85, timeConstantSeconds: 880, ambientCelsius: 21 },
      anodeMeter: anodeMeter(-0.9),
    },
  ],
}

const perfect: Quality = { gainError: 0, offsetError: 0, noise: 0, step: 0 }

/**
 * The same benches without noise, digits, resolution, ripple, drift, instrument errors and stray field.
 * `chargeToMass` replaces the electron's, so that a test can tell whether an answer follows the model's constant.
 */
export function ideal(scenario: Scenario, changes: { chargeToMass?: number } = {}): Scenario {
  return {
    benches: scenario.benches.map((bench) => ({
      ...bench,
      chargeToMass: changes.chargeToMass ?? bench.chargeToMass,
      strayFieldTesla: { x: 0, y: 0, z: 0 },
      outputs: {
        heater: idealOutput(bench.outputs.heater),
        anode: idealOutput(bench.outputs.anode),
        coils: idealOutput(bench.outputs.coils),
      },
      anodeMeter: { ...bench.anodeMeter, reading: perfect, offset: 0 },
      coilMeter: { ...bench.coilMeter, reading: perfect, offset: 0 },
    })),
  }
}

function idealOutput(output: OutputScenario): OutputScenario {
  return {
    ...output,
    setVolts: perfect,
    setAmps: perfect,
    readVolts: perfect,
    readAmps: perfect,
    ripple: 0,
    drift: 0,
  }
}
