import { environment } from '../env.server.ts'

/** Where this browser reaches the bridge's telemetry: the host it asked the page of, on the bridge's port, unless the site says otherwise. */
export function bridgeSocketUrl(request: Request): string {
  const { BRIDGE_PUBLIC_URL, BRIDGE_URL } = environment()
  const url = new URL('/telemetry', BRIDGE_PUBLIC_URL ?? BRIDGE_URL)
  if (!BRIDGE_PUBLIC_URL) url.hostname = new URL(request.url).hostname
  url.protocol = url.protocol === 'https:' ? 'wss:' : 'ws:'
  return url.href
}
