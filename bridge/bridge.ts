import { once } from 'node:events'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import { protocolVersion } from '#app/protocol/messages.ts'
import { startAppLink } from './app-link.ts'
import type { NewEvent } from './bench.ts'
import { createBus } from './bus.ts'
import { startCameras } from './camera.ts'
import { type Clock, monotonicClock, within } from './clock.ts'
import { createHttp } from './http.ts'
import type { OpenPort } from './instruments/open-port.ts'
import type { Log } from './log.ts'
import { createRoom } from './room.ts'
import { openSpool } from './spool.ts'
import { createTelemetry } from './websocket.ts'

const closeSeconds = 2

export type BridgeOptions = {
  openPort: OpenPort
  /** Monotonic seconds; the machine's own by default. */
  clock?: Clock
  /** What the dead-man counts input by; `clock` by default. */
  presenceClock?: Clock
  log: Log
  secret: string
  bridgeId: string
  appUrl: string
  allowedOrigins: readonly string[]
  spoolUrl: string
  /** Where the cameras of virtual benches are; none without it. */
  cameraLink?: string | undefined
  host: string
  port: number
  /** Most telemetry sockets at once; a thousand by default. */
  mostSockets?: number
}

export type Bridge = {
  /** `http://host:port`, the port as it was bound. */
  address: string
  /** Makes the room safe first, then ends everything. */
  close(): Promise<void>
}

/** A bridge of one room. It needs neither the app nor its database to keep the benches safe. */
export async function createBridge(options: BridgeOptions): Promise<Bridge> {
  const { log, secret } = options
  const clock = options.clock ?? monotonicClock
  const wallOffsetSeconds = Date.now() / 1000 - clock.now()
  const startedAt = Date.now() / 1000
  const spool = await openSpool(options.spoolUrl)
  const revocations = await spool.revocations()
  const bus = createBus()

  const failed = (what: string) => (error: unknown) => log.error({ error: String(error) }, what)
  const onEvent = (event: NewEvent) => {
    spool
      .addEvents([event])
      .then(([numbered]) => {
        if (numbered) bus.publish({ type: 'event', event: numbered })
        appLink.nudge()
      })
      .catch(failed('An event could not be kept'))
  }
  const room = createRoom({
    openPort: options.openPort,
    clock,
    presenceClock: options.presenceClock ?? clock,
    wallOf: (at) => at + wallOffsetSeconds,
    bus,
    log,
    onEvent,
    onSummaries: (summaries) => {
      spool.addSummaries(summaries).catch(failed('Summaries could not be kept'))
    },
  })
  const configure = async (benches: BenchConfig[]) => {
    room.configure(benches)
    await spool.keepConfiguration(benches)
  }

  const telemetry = createTelemetry({
    room,
    bus,
    clock,
    wallOffsetSeconds,
    secret,
    allowedOrigins: options.allowedOrigins,
    revokedAt: (personId) => revocations.get(personId) ?? null,
    log,
    ...(options.mostSockets === undefined ? {} : { mostSockets: options.mostSockets }),
  })
  const server = createHttp({
    room,
    secret,
    startedAt,
    health: () => ({
      status: 'up',
      bridgeId: options.bridgeId,
      protocol: protocolVersion,
      benches: room.benches().map(({ benchId, machine }) => ({ benchId, phase: machine.phase })),
    }),
    onConfiguration: configure,
    onRevocation: async (personId) => {
      const at = Date.now() / 1000
      revocations.set(personId, at)
      telemetry.dismiss(personId)
      await spool.revoke(personId, at)
    },
    log,
  })
  server.on('upgrade', telemetry.upgrade)

  room.configure((await spool.configuration()) ?? [])
  const appLink = startAppLink({
    appUrl: options.appUrl,
    secret,
    bridgeId: options.bridgeId,
    spool,
    log,
    wallNow: () => Date.now() / 1000,
    onConfiguration: (benches) => {
      configure(benches).catch(failed('The configuration could not be kept'))
    },
  })
  const stopCameras = options.cameraLink
    ? startCameras({
        link: options.cameraLink,
        paths: () => cameraPaths(room.benches()),
        everySeconds: (benchId) => telemetry.watchers.pictureSeconds(benchId),
        onPicture: (picture) => bus.publish(picture),
      })
    : () => undefined

  server.listen(options.port, options.host)
  await once(server, 'listening')
  const bound = server.address()
  const port = bound !== null && typeof bound === 'object' ? bound.port : options.port

  return {
    address: `http://${options.host.includes(':') ? `[${options.host}]` : options.host}:${port}`,
    async close() {
      room.end()
      await room.makeSafe('The bridge is being stopped.')
      stopCameras()
      telemetry.close()
      const closed = once(server, 'close')
      server.close()
      server.closeAllConnections()
      await within(closeSeconds, closed, undefined)
      await room.close()
      await appLink.close()
      await spool.close()
    },
  }
}

function cameraPaths(benches: ReturnType<ReturnType<typeof createRoom>['benches']>): Map<string, string> {
  const paths = new Map<string, string>()
  for (const { benchId, apparatus } of benches) {
    const path = apparatus?.config.picturePath
    if (path) paths.set(benchId, path)
  }
  return paths
}
