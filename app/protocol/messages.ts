import * as z from 'zod'
import { channels, contactNames, outputs, roles, tripKinds } from '../safety/types.ts'

/** Both ends refuse a message of another version with a reason that the page turns into a sentence. */
export const protocolVersion = 1

const wallSeconds = z.number()
const value = z.number().nullable()

export const channelStates = ['off', 'settling', 'settled', 'drifting', 'noisy', 'stale'] as const
export type ChannelState = (typeof channelStates)[number]

export const channelStatusSchema = z.object({
  state: z.enum(channelStates),
  mean: value,
  standardDeviation: value,
  driftPerSecond: value,
  /** Words for the page: '± 0.06 V over 5 s', '0.4 °C per minute'. */
  reason: z.string(),
})
export type ChannelStatus = z.infer<typeof channelStatusSchema>

const contactSchema = z.object({
  name: z.enum(contactNames),
  closed: z.boolean(),
  measured: z.string(),
  reason: z.string().nullable(),
})

const tripSchema = z.object({
  kind: z.enum(tripKinds),
  at: wallSeconds,
  happened: z.string(),
  toDo: z.string(),
})

/** The last shutdown: what was commanded and when, and whether each step was confirmed by the instrument. */
const shutdownSchema = z.object({
  at: wallSeconds,
  cause: z.string(),
  steps: z.array(z.object({ output: z.enum(outputs), confirmed: z.boolean() })),
})

const setpointSchema = z.object({
  /** What the person asked for. */
  asked: z.number(),
  /** What has been commanded so far: differs from `asked` while the ramp runs. */
  commanded: z.number(),
  /** Upper limit of this setpoint: the bench's. */
  limit: z.number(),
  on: z.boolean(),
})

export const benchStateSchema = z.object({
  benchId: z.string(),
  revision: z.number().nullable(),
  phase: z.enum(['unconfigured', 'lost', 'off', 'warming', 'ready', 'live', 'tripped']),
  since: wallSeconds,
  heater: setpointSchema,
  anode: setpointSchema,
  coils: setpointSchema,
  polarity: z.union([z.literal(1), z.literal(-1)]),
  polarityChanging: z.boolean(),
  warmUp: z.object({ elapsedSeconds: z.number(), requiredSeconds: z.number() }),
  contacts: z.array(contactSchema),
  trip: tripSchema.nullable(),
  shutdown: shutdownSchema.nullable(),
  /** Anode voltage as last measured, and when. Null when nothing has been measured since the line was lost. */
  anodeMeasured: z.object({ volts: z.number(), at: wallSeconds }).nullable(),
  controls: z
    .object({
      personId: z.string(),
      name: z.string(),
      role: z.enum(roles),
      since: wallSeconds,
      /** When the dead-man makes safe unless the person shows presence; and whether the warning is on. */
      presentUntil: wallSeconds,
      warned: z.boolean(),
    })
    .nullable(),
  ports: z.record(z.string(), z.enum(['closed', 'opening', 'open', 'lost'])),
  channels: z.partialRecord(z.enum(channels), channelStatusSchema),
  warnings: z.array(z.string()),
})
export type BenchState = z.infer<typeof benchStateSchema>

export const eventKinds = [
  'phase',
  'trip',
  'reset',
  'warning',
  'refusal',
  'command',
  'make-safe',
  'controls',
  'line',
  'interlock',
  'start',
] as const

/** Something that happened on a bench. Numbered without gaps by the bridge; the number survives its restart. */
export const benchEventSchema = z.object({
  sequence: z.int().nonnegative(),
  benchId: z.string().nullable(),
  at: wallSeconds,
  kind: z.enum(eventKinds),
  personId: z.string().nullable(),
  personName: z.string().nullable(),
  sentence: z.string(),
  data: z.record(z.string(), z.unknown()),
})
export type BenchEvent = z.infer<typeof benchEventSchema>

/** `times` are seconds of the bridge's monotonic clock; `first` numbers the first sample of the batch. */
export const samplesSchema = z.object({
  type: z.literal('samples'),
  benchId: z.string(),
  first: z.int().nonnegative(),
  times: z.array(z.number()),
  values: z.partialRecord(z.enum(channels), z.array(value)),
})
export type Samples = z.infer<typeof samplesSchema>

/** The beam as the eye sees it against the scale: millimetres along x and y, rounded to 0.2 mm. */
export const pictureSchema = z.object({
  type: z.literal('picture'),
  benchId: z.string(),
  points: z.array(z.tuple([z.number(), z.number()])),
  /** 0 is dark, 1 the brightest beam. */
  brightness: z.number(),
  widthMillimetres: z.number(),
})
export type Picture = z.infer<typeof pictureSchema>

/** Bridge to browser. */
export const fromBridgeSchema = z.discriminatedUnion('type', [
  z.object({
    type: z.literal('hello'),
    version: z.int(),
    /** Add to a monotonic time for seconds since 1970. */
    wallOffsetSeconds: z.number(),
    personId: z.string(),
    pageId: z.string(),
    resumeKey: z.string(),
    benchIds: z.array(z.string()),
  }),
  samplesSchema,
  z.object({ type: z.literal('state'), state: benchStateSchema }),
  z.object({ type: z.literal('event'), event: benchEventSchema }),
  pictureSchema,
  /** Samples that this watcher lost because it could not keep up. */
  z.object({ type: z.literal('dropped'), samples: z.int() }),
  z.object({ type: z.literal('bye'), reason: z.string() }),
])
export type FromBridge = z.infer<typeof fromBridgeSchema>

/** Browser to bridge: all that may be said on the socket. Nothing else is commanded there. */
export const fromBrowserSchema = z.discriminatedUnion('type', [
  z.object({ type: z.literal('present'), version: z.int(), benchId: z.string(), input: z.boolean() }),
  z.object({ type: z.literal('make-safe'), version: z.int(), benchId: z.string().nullable() }),
])
export type FromBrowser = z.infer<typeof fromBrowserSchema>

/** A parsed message, or the reason why it is none. */
export function parseMessage<T>(
  schema: z.ZodType<T>,
  text: string,
): { ok: true; message: T } | { ok: false; reason: string } {
  let raw: unknown
  try {
    raw = JSON.parse(text)
  } catch {
    return { ok: false, reason: 'The message is not JSON.' }
  }
  if (typeof raw === 'object' && raw !== null && 'version' in raw && raw.version !== protocolVersion) {
    return {
      ok: false,
      reason: `Protocol version ${typeof raw.version === 'number' ? raw.version : 'unknown'} is not ${protocolVersion}: reload the page.`,
    }
  }
  const parsed = schema.safeParse(raw)
  return parsed.success
    ? { ok: true, message: parsed.data }
    : { ok: false, reason: z.prettifyError(parsed.error) }
}
