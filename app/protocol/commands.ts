import * as z from 'zod'
import { channels, refusalCodes, roles } from '../safety/types.ts'
import { benchConfigSchema } from './bench-config.ts'
import { benchEventSchema, benchStateSchema, channelStatusSchema } from './messages.ts'

export const actorSchema = z.object({
  personId: z.string(),
  name: z.string(),
  role: z.enum(roles),
  acknowledged: z.boolean(),
})

/** What the app may command of one bench, on behalf of a person. NaN cannot be written in JSON: it arrives as null and is refused. */
export const commandSchema = z.discriminatedUnion('kind', [
  z.object({ kind: z.literal('take-controls') }),
  z.object({ kind: z.literal('take-over') }),
  z.object({
    kind: z.literal('hand-over'),
    toPersonId: z.string(),
    toName: z.string(),
    toRole: z.enum(roles),
    toAcknowledged: z.boolean(),
  }),
  z.object({ kind: z.literal('release-controls') }),
  z.object({ kind: z.literal('switch-heater'), on: z.boolean() }),
  z.object({ kind: z.literal('set-anode'), volts: z.number().nullable() }),
  z.object({ kind: z.literal('set-coils'), amps: z.number().nullable() }),
  z.object({ kind: z.literal('set-polarity'), polarity: z.union([z.literal(1), z.literal(-1)]) }),
  z.object({ kind: z.literal('reset-trip') }),
  z.object({ kind: z.literal('make-safe') }),
])
export type Command = z.infer<typeof commandSchema>

/** POST /benches/:benchId/commands */
export const commandRequestSchema = z.object({ actor: actorSchema, command: commandSchema })

export const refusalSchema = z.object({ code: z.enum(refusalCodes), sentence: z.string() })

export const commandReplySchema = z.object({
  accepted: z.boolean(),
  refusals: z.array(refusalSchema),
  /** What was done, in a sentence, when accepted. */
  answer: z.string(),
  state: benchStateSchema,
})
export type CommandReply = z.infer<typeof commandReplySchema>

/** POST /benches/:benchId/captures */
export const captureRequestSchema = z.object({ actor: actorSchema })

/** A settled window of all channels, taken from the bridge's own ring buffer. */
export const captureSchema = z.object({
  benchId: z.string(),
  revision: z.int(),
  at: z.number(),
  windowSeconds: z.number(),
  polarity: z.union([z.literal(1), z.literal(-1)]),
  times: z.array(z.number()),
  samples: z.partialRecord(z.enum(channels), z.array(z.number().nullable())),
  statistics: z.partialRecord(
    z.enum(channels),
    z.object({
      mean: z.number(),
      standardDeviation: z.number(),
      standardError: z.number(),
      effectiveCount: z.number(),
      count: z.int(),
    }),
  ),
  states: z.partialRecord(z.enum(channels), channelStatusSchema),
})
export type Capture = z.infer<typeof captureSchema>

export const captureReplySchema = z.discriminatedUnion('accepted', [
  z.object({ accepted: z.literal(true), capture: captureSchema }),
  z.object({ accepted: z.literal(false), refusals: z.array(refusalSchema) }),
])
export type CaptureReply = z.infer<typeof captureReplySchema>

/** POST /make-safe: the whole room. */
export const makeSafeRequestSchema = z.object({ actor: actorSchema })

/** What was commanded and measured on each bench, in a sentence that names the steps not confirmed. */
export const makeSafeReplySchema = z.object({
  benches: z.array(z.object({ benchId: z.string(), answer: z.string() })),
})
export type MakeSafeReply = z.infer<typeof makeSafeReplySchema>

/** PUT /configuration, and the answer of the app's GET /api/bridge/configuration. */
export const configurationSchema = z.object({ benches: z.array(benchConfigSchema) })

/** POST /revocations: no resume key of this person issued before now is good any longer. */
export const revocationSchema = z.object({ personId: z.string() })

/** One second of one channel. */
export const summarySchema = z.object({
  sequence: z.int().nonnegative(),
  benchId: z.string(),
  second: z.int(),
  channel: z.enum(channels),
  min: z.number(),
  mean: z.number(),
  max: z.number(),
  count: z.int(),
})
export type Summary = z.infer<typeof summarySchema>

/**
 * POST /api/bridge/spool at the app. Each of the two sequences begins at 1 and rises without gaps. The app ignores what
 * it has and confirms the highest number up to which it has all; 0 is none.
 *
 * `oldest` are the lowest numbers that the bridge still holds, or the next it will give. What is below was confirmed once
 * and cannot be sent again: an app that has not got it, as after a database was restored, notes the gap and goes on.
 */
export const spoolBatchSchema = z.object({
  bridgeId: z.string().min(1).max(100),
  oldest: z.object({ event: z.int().positive(), summary: z.int().positive() }),
  events: z.array(benchEventSchema).max(1000),
  summaries: z.array(summarySchema).max(5000),
})
export type SpoolBatch = z.infer<typeof spoolBatchSchema>

/**
 * `continueAfter` is there when numbers of the batch stand at the app for something else, as after the bridge lost its
 * spool: the app took nothing from that number on, and the bridge numbers what is not confirmed anew, behind it.
 */
export const spoolReplySchema = z.object({
  confirmedEvent: z.int(),
  confirmedSummary: z.int(),
  continueAfter: z.object({ event: z.int().optional(), summary: z.int().optional() }).optional(),
})
export type SpoolReply = z.infer<typeof spoolReplySchema>

/** What a ticket says. Signed by the app; opens a connection within one minute of its making. */
export const ticketSchema = z.object({
  use: z.enum(['ticket', 'resume']),
  personId: z.string(),
  name: z.string(),
  role: z.enum(roles),
  /** Benches this person may watch; null is all of the room. */
  benchIds: z.array(z.string()).nullable(),
  /** Whether this person may make the whole room safe. */
  room: z.boolean(),
  issuedAt: z.number(),
  expiresAt: z.number(),
})
export type Ticket = z.infer<typeof ticketSchema>
