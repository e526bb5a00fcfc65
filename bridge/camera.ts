import { connect, type Socket } from 'node:net'
import { createInterface } from 'node:readline'
import * as z from 'zod'
import { type Picture, pictureSchema } from '#app/protocol/messages.ts'

const lookSeconds = 0.1
const silentSeconds = 2
const retrySeconds = 1

const seenSchema = z.object({
  points: pictureSchema.shape.points,
  brightness: z.number(),
  widthMillimetres: z.number(),
})

type CameraOptions = {
  /** The link to the cameras of virtual benches: `host:port` or the path of a local socket. */
  link: string
  /** Camera paths by bench, as configured. */
  paths: () => ReadonlyMap<string, string>
  /** How often a picture of a bench is wanted, null for not at all. */
  everySeconds: (benchId: string) => number | null
  onPicture: (picture: Picture) => void
}

/** Asks each camera for pictures while somebody looks, and hangs up when nobody does. Returns what ends it. */
export function startCameras(options: CameraOptions): () => void {
  const cameras = new Map<string, Camera>()
  const timer = setInterval(() => {
    for (const [benchId, path] of options.paths()) {
      const name = /^virtual:(.+)$/.exec(path)?.[1]
      const camera = cameras.get(benchId)
      const seconds = options.everySeconds(benchId)
      if (name !== undefined && seconds !== null) {
        if (camera) camera.ask(seconds)
        else cameras.set(benchId, new Camera(options.link, name, benchId, options.onPicture))
      } else if (camera) {
        camera.close()
        cameras.delete(benchId)
      }
    }
  }, lookSeconds * 1000)
  return () => {
    clearInterval(timer)
    for (const camera of cameras.values()) camera.close()
  }
}

class Camera {
  readonly #link: string
  readonly #name: string
  readonly #benchId: string
  readonly #onPicture: (picture: Picture) => void
  #socket: Socket | null = null
  #isOpen = false
  #askedAt: number | null = null
  #closedAt = Number.NEGATIVE_INFINITY
  #picturedAt = Number.NEGATIVE_INFINITY

  constructor(link: string, name: string, benchId: string, onPicture: (picture: Picture) => void) {
    this.#link = link
    this.#name = name
    this.#benchId = benchId
    this.#onPicture = onPicture
  }

  /** Asks for the next picture if it is time for it, unless one is on its way. */
  ask(everySeconds: number): void {
    const now = performance.now() / 1000
    if (!this.#socket) {
      if (now - this.#closedAt >= retrySeconds) this.#open()
    } else if (this.#askedAt !== null) {
      if (now - this.#askedAt > silentSeconds) this.#socket.destroy()
    } else if (this.#isOpen && now - this.#picturedAt > everySeconds - lookSeconds / 2) {
      this.#askedAt = now
      this.#picturedAt = now
      this.#socket.write('PICTURE\n')
    }
  }

  close(): void {
    this.#socket?.destroy()
  }

  #open(): void {
    const port = /^(.+):(\d+)$/.exec(this.#link)
    const socket = port
      ? connect({ host: port[1], port: Number(port[2]), noDelay: true })
      : connect({ path: this.#link })
    this.#socket = socket
    this.#isOpen = false
    this.#askedAt = performance.now() / 1000
    socket.on('connect', () => socket.write(`OPEN ${this.#name}\n`))
    socket.on('error', () => socket.destroy())
    socket.on('close', () => {
      if (this.#socket !== socket) return
      this.#socket = null
      this.#closedAt = performance.now() / 1000
    })
    createInterface({ input: socket }).on('line', (line) => this.#hear(line))
  }

  #hear(line: string): void {
    this.#askedAt = null
    if (!this.#isOpen) {
      if (line === 'OK') this.#isOpen = true
      else this.#socket?.destroy()
      return
    }
    const seen = parsePicture(line)
    if (seen) this.#onPicture({ type: 'picture', benchId: this.#benchId, ...seen })
  }
}

function parsePicture(line: string): z.infer<typeof seenSchema> | null {
  try {
    return seenSchema.parse(JSON.parse(line))
  } catch {
    return null
  }
}
