import { createHmac, randomUUID } from 'node:crypto'
import { requestText, signatureHeaders } from '#app/protocol/signing.ts'

export const bridgeSecret = 'a-secret-of-the-bridge-tests'

/** Signs as the app does: by the text agreed in app/protocol/signing.ts and nothing of the bridge's own. */
export function sign(
  method: string,
  path: string,
  body: string,
  {
    secret = bridgeSecret,
    time = Date.now() / 1000,
    nonce = randomUUID(),
  }: { secret?: string; time?: number | string; nonce?: string } = {},
): Record<string, string> {
  const text = requestText({ method, path, time: String(time), nonce, body })
  return {
    'content-type': 'application/json',
    [signatureHeaders.time]: String(time),
    [signatureHeaders.nonce]: nonce,
    [signatureHeaders.signature]: createHmac('sha256', secret).update(text).digest('hex'),
  }
}
