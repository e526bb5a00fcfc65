import { createLine, type Line } from './line.ts'
import type { OpenPort, SerialSettings } from './open-port.ts'
import type { Instrument } from './types.ts'

/** A driver speaks over a line of its own at `path`, opened by `openPort`. */
export type InstrumentOptions = { name: string; openPort: OpenPort; path: string }

export function lineOf(
  { openPort, path }: InstrumentOptions,
  { serial, limitSeconds, greeting }: { serial: SerialSettings; limitSeconds: number; greeting?: string },
): Line {
  return createLine({
    openPort: () => openPort(path, serial),
    limitSeconds,
    ...(greeting === undefined ? {} : { greeting }),
  })
}

/** The part of a driver that is the same for every kind of instrument. */
export function instrumentOf(name: string, line: Line): Instrument {
  return {
    name,
    get status() {
      return line.status
    },
    onStatus: (listener) => line.onStatus(listener),
    open: () => line.open(),
    close: () => line.close(),
  }
}
