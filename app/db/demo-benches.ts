import type { BenchConfig, TypedBench } from '../protocol/bench-config.ts'

/**
 * The three virtual benches of the demo as their technician measured them. What the apparatus truly is (its stray field,
 * the offset of a meter) is the simulator's affair, and differs from this within the stated uncertainties.
 */
const common = {
  revision: 1,
  sampleHertz: 10,
  window: { seconds: 5, holdSeconds: 1 },
  tolerance: { anodeVolts: 0.4, coilAmps: 0.002, heaterVolts: 0.1, coilCelsius: 0.5 },
  coilConnection: 'series',
  coilThermal: { kelvinPerWatt: 1.8, timeConstantSeconds: 900, ambientCelsius: 21 },
  beam: { halfWidthMetres: 0.0003 },
} satisfies Partial<BenchConfig>

const commonLimits = {
  anodeAmps: 0.008,
  heaterVolts: { nominal: 6.3, low: 6.0, high: 6.6 },
  warmUpSeconds: 10,
  anodeVoltsPerSecond: 80,
  coilAmpsPerSecond: 1,
  readBack: { anodeVolts: 6, coilAmps: 0.05 },
  deadManMinutes: 10,
  heaterOffOnTrip: false,
  studentMayReset: true,
}

function instruments(benchId: string): BenchConfig['instruments'] {
  return {
    supply: {
      path: `virtual:${benchId}/supply`,
      profile: 'scpi-triple-supply',
      channels: { heater: 1, anode: 2, coils: 3 },
    },
    anodeMeter: {
      path: `virtual:${benchId}/anode-meter`,
      profile: 'scpi-volt-meter',
      accuracy: { percentOfReading: 0.1, digits: 2, digitSize: 0.01 },
    },
    coilMeter: {
      path: `virtual:${benchId}/coil-meter`,
      profile: 'scpi-ampere-meter',
      accuracy: { percentOfReading: 0.2, digits: 3, digitSize: 0.0001 },
    },
    interlock: { path: `virtual:${benchId}/interlock`, profile: 'scpi-interlock' },
  }
}

export const demoBenches: BenchConfig[] = [
  {
    ...common,
    benchId: 'bench-1',
    name: 'Bench 1',
    place: 'door side',
    coilPair: {
      coils: [
        { turns: 130, radiusMetres: 0.15 },
        { turns: 130, radiusMetres: 0.15 },
      ],
      separationMetres: 0.15,
    },
    coilUncertainty: { radiusMetres: 0.0005, separationMetres: 0.0005, turns: 0 },
    coilResistance: { ohms: 4.3, celsius: 21 },
    reversal: 'not',
    tube: { bulbRadiusMetres: 0.08, edges: 'outer' },
    gun: { xMetres: 0.041, yMetres: 0, direction: { x: 0, y: 1 } },
    scale: {
      kind: 'mirror',
      graduationMetres: 0.001,
      readableFraction: 0.5,
      zeroMetres: -0.06,
      lengthMetres: 0.12,
      distanceBehindMetres: 0,
      uDistanceBehindMetres: 0,
      eyeDistanceMetres: 0.6,
    },
    limits: { ...commonLimits, anodeVolts: 300, coilAmps: 2, coilCelsius: 60 },
    instruments: instruments('bench-1'),
    picturePath: 'virtual:bench-1/camera',
  },
  {
    ...common,
    benchId: 'bench-2',
    name: 'Bench 2',
    place: 'middle row',
    coilPair: {
      coils: [
        { turns: 154, radiusMetres: 0.2 },
        { turns: 154, radiusMetres: 0.2 },
      ],
      separationMetres: 0.2,
    },
    coilUncertainty: { radiusMetres: 0.0007, separationMetres: 0.0007, turns: 0 },
    coilResistance: { ohms: 5.1, celsius: 21 },
    reversal: 'coils-only',
    tube: { bulbRadiusMetres: 0.085, edges: 'outer' },
    gun: { xMetres: 0, yMetres: 0, direction: { x: 0, y: 1 } },
    scale: {
      kind: 'ruler-behind',
      graduationMetres: 0.001,
      readableFraction: 0.5,
      zeroMetres: -0.08,
      lengthMetres: 0.16,
      distanceBehindMetres: 0.08,
      uDistanceBehindMetres: 0.003,
      eyeDistanceMetres: 0.6,
    },
    limits: { ...commonLimits, anodeVolts: 280, coilAmps: 3, coilCelsius: 60 },
    instruments: instruments('bench-2'),
    picturePath: 'virtual:bench-2/camera',
  },
  {
    ...common,
    benchId: 'bench-3',
    name: 'Bench 3',
    place: 'north window',
    coilPair: {
      coils: [
        { turns: 124, radiusMetres: 0.147, windingWidthMetres: 0.02, windingDepthMetres: 0.018 },
        { turns: 124, radiusMetres: 0.147, windingWidthMetres: 0.02, windingDepthMetres: 0.018 },
      ],
      separationMetres: 0.15,
    },
    coilUncertainty: { radiusMetres: 0.0006, separationMetres: 0.0008, turns: 0 },
    coilResistance: { ohms: 3.8, celsius: 21 },
    reversal: 'apparatus-turned',
    tube: { bulbRadiusMetres: 0.078, edges: 'outer' },
    gun: { xMetres: 0.03, yMetres: 0, direction: { x: 0, y: 1 } },
    scale: {
      kind: 'mirror',
      graduationMetres: 0.001,
      readableFraction: 0.5,
      zeroMetres: -0.07,
      lengthMetres: 0.12,
      distanceBehindMetres: 0,
      uDistanceBehindMetres: 0,
      eyeDistanceMetres: 0.6,
    },
    limits: { ...commonLimits, anodeVolts: 250, coilAmps: 2.2, coilCelsius: 55 },
    instruments: instruments('bench-3'),
    picturePath: 'virtual:bench-3/camera',
  },
]

/** The demo's bench without ports: what a laboratory measures by hand. Nothing stands behind it but this. */
export const demoTypedBench: TypedBench = {
  benchId: 'bench-4',
  name: 'Bench 4',
  place: 'back wall',
  revision: 1,
  coilPair: {
    coils: [
      { turns: 140, radiusMetres: 0.16 },
      { turns: 140, radiusMetres: 0.16 },
    ],
    separationMetres: 0.16,
  },
  coilUncertainty: { radiusMetres: 0.001, separationMetres: 0.001, turns: 0 },
  coilConnection: 'series',
  reversal: 'not',
  tube: { bulbRadiusMetres: 0.08, edges: 'outer' },
  gun: { xMetres: 0.042, yMetres: 0, direction: { x: 0, y: 1 } },
  scale: {
    kind: 'ruler-behind',
    graduationMetres: 0.001,
    readableFraction: 0.5,
    zeroMetres: -0.07,
    lengthMetres: 0.14,
    distanceBehindMetres: 0.085,
    uDistanceBehindMetres: 0.003,
    eyeDistanceMetres: 0.6,
  },
  beam: { halfWidthMetres: 0.0004 },
  limits: { anodeVolts: 280, coilAmps: 2 },
  instruments: null,
  meters: {
    anode: { percentOfReading: 0.5, digits: 1, digitSize: 0.1 },
    coils: { percentOfReading: 0.8, digits: 1, digitSize: 0.01 },
  },
  checklist: [
    { contact: 'leads', statement: 'The leads are whole and plugged as the wiring plan shows.' },
    { contact: 'enclosure', statement: 'The cover over the tube’s terminals is closed.' },
    {
      contact: 'e-stop',
      statement: 'The emergency stop is out, within reach, and cut the supply when tried today.',
    },
    { contact: 'limit', statement: 'The anode supply’s own limit stands at 280 V or below.' },
    { contact: 'warm-up', statement: 'The heater has had 6.0 to 6.6 V for two minutes.' },
    { contact: 'coil temp', statement: 'The thermometer on the coils shows less than 60 °C.' },
    { contact: 'person', statement: 'One person sets this bench, and nobody works alone.' },
  ],
  picturePath: null,
}
