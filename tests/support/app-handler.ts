import { once } from 'node:events'
import { createServer as createHttpServer } from 'node:http'
import type { AddressInfo } from 'node:net'
import { createRequestListener } from '@react-router/node'
import { createRequestHandler, type ServerBuild } from 'react-router'
import { createServer } from 'vite'

export type AppHandler = {
  /** The application's answer to a request, as its server would give it: routing, middleware, loaders, actions and pages. */
  handle: (request: Request) => Promise<Response>
  /** Serves the same over HTTP on this machine, and answers with its origin. */
  listen: () => Promise<string>
  close: () => Promise<void>
}

/** The whole application from its sources, through the framework's own request handler. */
export async function startApp(): Promise<AppHandler> {
  const vite = await createServer({
    server: { middlewareMode: true, hmr: false, ws: false, watch: null },
    appType: 'custom',
    logLevel: 'error',
    optimizeDeps: { noDiscovery: true },
  })
  const build = (await vite.ssrLoadModule('virtual:react-router/server-build')) as unknown as ServerBuild
  const handle = createRequestHandler(build, 'production')
  const server = createHttpServer(createRequestListener({ build, mode: 'production' }))
  return {
    handle: (request) => handle(request),
    async listen() {
      server.listen(0, '127.0.0.1')
      await once(server, 'listening')
      return `http://127.0.0.1:${(server.address() as AddressInfo).port}`
    },
    async close() {
      if (server.listening) {
        server.closeAllConnections()
        server.close()
        await once(server, 'close')
      }
      await vite.close()
    },
  }
}
