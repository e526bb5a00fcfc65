/** Requests between app and bridge carry these three headers, in both directions. */
export const signatureHeaders = {
  time: 'coilside-time',
  nonce: 'coilside-nonce',
  signature: 'coilside-signature',
} as const

/** A signed request is good for this long, once. */
export const signatureSeconds = 60

/**
 * The text whose HMAC-SHA256 (hex, key: the shared bridge secret) is the signature of a request.
 * `path` includes the query; `body` is the text as sent, empty for none. `time` is the sender's clock in seconds since
 * 1970, as decimal text; `nonce` is any text of 16 to 64 characters that the sender never uses again.
 */
export function requestText(request: {
  method: string
  path: string
  time: string
  nonce: string
  body: string
}): string {
  return [request.method, request.path, request.time, request.nonce, request.body].join('\n')
}

/** A ticket travels as `<base64url of its JSON>.<HMAC-SHA256 of that text, hex>`, in the query `?ticket=` or `?resume=`. */
export const ticketSeconds = 60
export const resumeSeconds = 12 * 3600
