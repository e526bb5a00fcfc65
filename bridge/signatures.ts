import { randomUUID } from 'node:crypto'
import type { IncomingHttpHeaders } from 'node:http'
import { requestText, signatureHeaders, signatureSeconds } from '#app/protocol/signing.ts'
import { isSignatureOf, signatureOf } from './tickets.ts'

type SignedRequest = { method: string; path: string; headers: IncomingHttpHeaders; body: string }

const nonceLengths = { least: 16, most: 64 }

/** Headers that sign a request from the bridge to the app. `now` is seconds since 1970. */
export function signedHeaders(
  secret: string,
  request: { method: string; path: string; body: string },
  now: number,
): Record<string, string> {
  const time = String(now)
  const nonce = randomUUID()
  return {
    [signatureHeaders.time]: time,
    [signatureHeaders.nonce]: nonce,
    [signatureHeaders.signature]: signatureOf(secret, requestText({ ...request, time, nonce })),
  }
}

/**
 * Checks signed requests: each is good for a minute, once. Nonces are remembered in memory for as long, so a request
 * signed before this process began is refused: whether it was already used cannot be known.
 */
export function createSignatureCheck(secret: string, startedAt: number) {
  const seen = new Map<string, number>()
  return (request: SignedRequest, now: number): { ok: true } | { ok: false; reason: string } => {
    const header = (name: string) => {
      const value = request.headers[name]
      return typeof value === 'string' ? value : ''
    }
    const time = header(signatureHeaders.time)
    const nonce = header(signatureHeaders.nonce)
    const signedAt = time === '' ? Number.NaN : Number(time)
    const text = requestText({
      method: request.method,
      path: request.path,
      time,
      nonce,
      body: request.body,
    })
    if (nonce.length < nonceLengths.least || nonce.length > nonceLengths.most || !Number.isFinite(signedAt)) {
      return { ok: false, reason: 'The request is not signed.' }
    }
    if (!isSignatureOf(secret, text, header(signatureHeaders.signature))) {
      return { ok: false, reason: 'The signature is not right.' }
    }
    if (Math.abs(now - signedAt) > signatureSeconds) {
      return { ok: false, reason: 'The request was signed more than a minute ago.' }
    }
    if (signedAt < startedAt) {
      return { ok: false, reason: 'The request was signed before this bridge was started.' }
    }
    for (const [old, until] of seen) {
      if (until >= now) break
      seen.delete(old)
    }
    if (seen.has(nonce)) return { ok: false, reason: 'The request has been used before.' }
    seen.set(nonce, now + 2 * signatureSeconds)
    return { ok: true }
  }
}
