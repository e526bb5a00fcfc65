import { createHmac, randomUUID, timingSafeEqual } from 'node:crypto'
import { requestText, signatureHeaders, signatureSeconds } from '../protocol/signing.ts'

type Signable = { method: string; path: string; body: string }

const hmac = (text: string, secret: string) => createHmac('sha256', secret).update(text).digest('hex')

/** The three headers that let a request through at the other end, once, within a minute. */
export function signRequest(request: Signable & { secret: string; now?: number }): Record<string, string> {
  const time = String(request.now ?? Date.now() / 1000)
  const nonce = randomUUID()
  return {
    [signatureHeaders.time]: time,
    [signatureHeaders.nonce]: nonce,
    [signatureHeaders.signature]: hmac(requestText({ ...request, time, nonce }), request.secret),
  }
}

/** The HMAC-SHA256 of a text in hex: the second half of a ticket. */
export const signText = hmac

function isSame(given: string, wanted: string): boolean {
  const [a, b] = [Buffer.from(given), Buffer.from(wanted)]
  return a.length === b.length && timingSafeEqual(a, b)
}

/** Remembers each accepted nonce for as long as its signature could be good, so that no request counts twice. */
export class ReplayMemory {
  readonly #goodUntil = new Map<string, number>()

  /** False when the nonce was here before. `now` is in seconds. */
  admit(nonce: string, now: number): boolean {
    for (const [old, until] of this.#goodUntil) {
      if (until >= now) break
      this.#goodUntil.delete(old)
    }
    if (this.#goodUntil.has(nonce)) return false
    // A clock that runs ahead by the whole tolerance makes a signature good for twice that time.
    this.#goodUntil.set(nonce, now + 2 * signatureSeconds)
    return true
  }
}

/**
 * Checks a request's signature, then its age, then that it was not here before.
 * @returns null when it is good, else the reason in a sentence
 */
export function checkSignature(
  request: Signable & { headers: Headers; secret: string; memory: ReplayMemory; now?: number },
): string | null {
  const now = request.now ?? Date.now() / 1000
  const time = request.headers.get(signatureHeaders.time)
  const nonce = request.headers.get(signatureHeaders.nonce)
  const signature = request.headers.get(signatureHeaders.signature)
  if (!time || !nonce || !signature) return 'The request is not signed.'
  if (!isSame(signature, hmac(requestText({ ...request, time, nonce }), request.secret)))
    return 'The signature is not good.'
  if (!(Math.abs(Number(time) - now) <= signatureSeconds))
    return 'The signature is too old, or a clock is wrong.'
  if (!/^.{16,64}$/.test(nonce)) return 'The nonce is too short or too long.'
  if (!request.memory.admit(nonce, now)) return 'This request was here before.'
  return null
}
