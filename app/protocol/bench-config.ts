import * as z from 'zod'

const positive = z.number().positive()
const nonNegative = z.number().nonnegative()

export const coilSchema = z.object({
  turns: positive,
  radiusMetres: positive,
  windingWidthMetres: positive.optional(),
  windingDepthMetres: positive.optional(),
})

/** Meter accuracy as a data sheet states it: ±(percent of reading + digits). */
export const accuracySchema = z.object({
  percentOfReading: nonNegative,
  digits: nonNegative,
  digitSize: positive,
})

export const limitsSchema = z.object({
  anodeVolts: positive,
  anodeAmps: positive,
  coilAmps: positive,
  coilCelsius: positive,
  heaterVolts: z.object({ nominal: positive, low: positive, high: positive }),
  warmUpSeconds: nonNegative,
  anodeVoltsPerSecond: positive,
  coilAmpsPerSecond: positive,
  readBack: z.object({ anodeVolts: positive, coilAmps: positive }),
  deadManMinutes: z.number().min(1).max(30),
  heaterOffOnTrip: z.boolean(),
  studentMayReset: z.boolean(),
})

/** A port path is `virtual:<bench>/<instrument>` or a device path such as `/dev/ttyUSB0`. */
export const instrumentsSchema = z.object({
  supply: z.object({
    path: z.string().min(1),
    profile: z.string(),
    channels: z.object({ heater: z.int(), anode: z.int(), coils: z.int() }),
  }),
  anodeMeter: z.object({ path: z.string().min(1), profile: z.string(), accuracy: accuracySchema }),
  coilMeter: z.object({ path: z.string().min(1), profile: z.string(), accuracy: accuracySchema }),
  interlock: z.object({ path: z.string().min(1), profile: z.string() }),
})

/** Reversal of the beam's sense: what the apparatus allows. */
export const reversals = ['not', 'coils-only', 'tube-turned', 'apparatus-turned'] as const

/** A scale with divisions, on which both edges of the beam are read. */
const rulerSchema = z.object({
  kind: z.enum(['mirror', 'ruler-behind']),
  graduationMetres: positive,
  /** The part of a graduation that a careful reader can still tell. */
  readableFraction: positive,
  /** Position of the zero mark, and the length, along x. */
  zeroMetres: z.number(),
  lengthMetres: positive,
  distanceBehindMetres: nonNegative,
  uDistanceBehindMetres: nonNegative,
  eyeDistanceMetres: positive,
})

export type RulerScale = z.infer<typeof rulerSchema>

/** Rungs that the beam is made to meet: the diameter is that of the rung, and the current is what is set. */
const rungsSchema = z.object({
  kind: z.literal('rungs'),
  rungs: z.array(z.object({ name: z.string().min(1), distanceMetres: positive })).min(1),
  /** Standard uncertainty of the distance from the gun's opening to a rung. */
  uDistanceMetres: nonNegative,
})

/** What every bench is known by. SI units; z is the coil axis, x points right, y up, seen from +z. */
const commonShape = {
  benchId: z.string(),
  name: z.string(),
  place: z.string(),
  revision: z.int().positive(),
  coilPair: z.object({ coils: z.tuple([coilSchema, coilSchema]), separationMetres: positive }),
  coilUncertainty: z.object({ radiusMetres: nonNegative, separationMetres: nonNegative, turns: nonNegative }),
  /** Measured centre field an ampere through each coil, from a certificate: it takes the place of the geometry in the budget. */
  fieldFactor: z.object({ teslaPerAmp: positive, standardUncertainty: nonNegative }).optional(),
  coilConnection: z.enum(['series', 'parallel']),
  reversal: z.enum(reversals),
  tube: z.object({ bulbRadiusMetres: positive, edges: z.enum(['outer', 'inner', 'middle']) }),
  gun: z.object({
    xMetres: z.number(),
    yMetres: z.number(),
    direction: z.object({ x: z.number(), y: z.number() }),
  }),
  scale: z.discriminatedUnion('kind', [rulerSchema, rungsSchema]),
  beam: z.object({ halfWidthMetres: positive }),
}

/** One revision of a bench with ports as it was commissioned: the bridge knows these alone. */
export const benchConfigSchema = z.object({
  ...commonShape,
  sampleHertz: z.number().min(1).max(50),
  window: z.object({ seconds: positive, holdSeconds: nonNegative }),
  /** Largest standard deviation, and largest drift over the window, of a settled channel. */
  tolerance: z.object({
    anodeVolts: positive,
    coilAmps: positive,
    heaterVolts: positive,
    coilCelsius: positive,
  }),
  coilResistance: z.object({ ohms: positive, celsius: z.number() }),
  coilThermal: z.object({
    kelvinPerWatt: positive,
    timeConstantSeconds: positive,
    ambientCelsius: z.number(),
  }),
  limits: limitsSchema,
  instruments: instrumentsSchema,
  /** Where a picture of the beam comes from, if the bench has one. */
  picturePath: z.string().nullable(),
})
export type BenchConfig = z.infer<typeof benchConfigSchema>

/**
 * One revision of a bench without ports: a person reads its meters and types what they show. It has no outputs, and its
 * interlock chain is a checklist that a person ticks.
 */
export const typedBenchSchema = z.object({
  ...commonShape,
  limits: z.object({ anodeVolts: positive, coilAmps: positive }),
  instruments: z.null(),
  meters: z.object({ anode: accuracySchema, coils: accuracySchema }),
  /** In the order in which a tube is brought up: the contact's name, and what has to hold. */
  checklist: z.array(z.object({ contact: z.string().min(1), statement: z.string().min(1) })).min(1),
  picturePath: z.null(),
})
export type TypedBench = z.infer<typeof typedBenchSchema>

/** Any bench as it was commissioned. `instruments` tells with ports from without. */
export type CommissionedBench = BenchConfig | TypedBench
