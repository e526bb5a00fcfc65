import * as z from 'zod'
import { environment } from '../env.server.ts'
import {
  type CaptureReply,
  type Command,
  type CommandReply,
  captureReplySchema,
  commandReplySchema,
  type MakeSafeReply,
  makeSafeReplySchema,
} from '../protocol/commands.ts'
import type { Actor } from '../safety/types.ts'
import { signRequest } from './signature.server.ts'

/**
 * What became of a question to the bridge. `unsent`: it never arrived, so nothing was done. `unknown`: it was sent and no
 * usable answer came back, so it may have been done. `rejected`: the bridge answered that it would not look at it.
 */
export type BridgeAnswer<Reply> =
  | { kind: 'answered'; reply: Reply }
  | { kind: 'unsent' | 'unknown' | 'rejected'; sentence: string }

const answerMilliseconds = 4000

const treatAsLive =
  'Outputs that were on may still be on: treat the tube as live, and use the emergency stop if it has to be off now.'

/** Codes of a connection that was never made, so that no byte of the request has left this machine. */
const neverConnected = new Set(['ECONNREFUSED', 'ENOTFOUND', 'EHOSTUNREACH', 'ENETUNREACH', 'EAI_AGAIN'])

function failure(error: unknown): BridgeAnswer<never> {
  const cause = error instanceof Error ? error.cause : undefined
  const code = cause instanceof Error && 'code' in cause ? cause.code : undefined
  if (typeof code === 'string' && neverConnected.has(code))
    return {
      kind: 'unsent',
      sentence: `The bridge of this room does not answer, so nothing was commanded. ${treatAsLive}`,
    }
  return {
    kind: 'unknown',
    sentence: `The bridge did not answer in time: whether this was done is not known. ${treatAsLive}`,
  }
}

function rejection(status: number, text: string): BridgeAnswer<never> {
  if (status === 404)
    return {
      kind: 'rejected',
      sentence: 'The bridge of this room does not know this bench: tell the technician.',
    }
  if (status === 401)
    return {
      kind: 'rejected',
      sentence:
        'The bridge did not accept this application’s signature, so nothing was commanded: tell the technician to compare the secret and the clock of both.',
    }
  if (status >= 500)
    return {
      kind: 'unknown',
      sentence: `The bridge failed (${status}): whether this was done is not known. ${treatAsLive}`,
    }
  return { kind: 'rejected', sentence: `The bridge refused the request (${status}): ${text.slice(0, 200)}` }
}

/** Signs and sends one request to the bridge, and reads the answer by its schema. Never throws for what the bridge does. */
async function ask<Reply>(
  method: 'POST' | 'PUT',
  path: string,
  body: object,
  schema: z.ZodType<Reply>,
): Promise<BridgeAnswer<Reply>> {
  const { BRIDGE_URL, BRIDGE_SECRET } = environment()
  const url = new URL(path, BRIDGE_URL)
  const text = JSON.stringify(body)
  const signature = signRequest({
    method,
    path: url.pathname + url.search,
    body: text,
    secret: BRIDGE_SECRET,
  })
  let status: number
  let answer: string
  try {
    const response = await fetch(url, {
      method,
      body: text,
      headers: { 'Content-Type': 'application/json', ...signature },
      signal: AbortSignal.timeout(answerMilliseconds),
      redirect: 'error',
    })
    status = response.status
    answer = await response.text()
  } catch (error) {
    return failure(error)
  }
  if (status >= 300) return rejection(status, answer)
  const parsed = schema.safeParse(parseJson(answer))
  if (parsed.success) return { kind: 'answered', reply: parsed.data }
  console.error(
    `The bridge's answer to ${method} ${path} is not understood:\n${z.prettifyError(parsed.error)}`,
  )
  return {
    kind: 'unknown',
    sentence: `The bridge's answer is not understood: it may be of another version. Whether this was done is not known. ${treatAsLive}`,
  }
}

function parseJson(text: string): unknown {
  try {
    return JSON.parse(text)
  } catch {
    return undefined
  }
}

export const sendCommand = (
  benchId: string,
  request: { actor: Actor; command: Command },
): Promise<BridgeAnswer<CommandReply>> =>
  ask('POST', `/benches/${encodeURIComponent(benchId)}/commands`, request, commandReplySchema)

export const askCapture = (benchId: string, request: { actor: Actor }): Promise<BridgeAnswer<CaptureReply>> =>
  ask('POST', `/benches/${encodeURIComponent(benchId)}/captures`, request, captureReplySchema)

export const sendRoomMakeSafe = (request: { actor: Actor }): Promise<BridgeAnswer<MakeSafeReply>> =>
  ask('POST', '/make-safe', request, makeSafeReplySchema)

/** Tells the bridge that no page of this person may come back with an old resume key. */
export const revokeResumeKeys = (personId: string): Promise<BridgeAnswer<unknown>> =>
  ask('POST', '/revocations', { personId }, z.unknown())
