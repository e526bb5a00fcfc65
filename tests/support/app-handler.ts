import { createRequestHandler, type ServerBuild } from 'react-router'
import { createServer } from 'vite'

export type AppHandler = {
  /** The application's answer to a request, as its server would give it: routing, middleware, loaders, actions and pages. */
  handle: (request: Request) => Promise<Response>
  close: () => Promise<void>
}

/** The whole application from its sources, through the framework's own request handler, without a port. */
export async function startApp(): Promise<AppHandler> {
  const vite = await createServer({
    server: { middlewareMode: true, hmr: false, ws: false, watch: null },
    appType: 'custom',
    logLevel: 'error',
    optimizeDeps: { noDiscovery: true },
  })
  const build = (await vite.ssrLoadModule('virtual:react-router/server-build')) as unknown as ServerBuild
  const handle = createRequestHandler(build, 'production')
  return { handle: (request) => handle(request), close: () => vite.close() }
}
