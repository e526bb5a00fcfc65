import { SerialPortStream } from '@serialport/stream'
import { createVirtualBinding } from './virtual-binding.ts'

export type SerialSettings = {
  baudRate: number
  dataBits: 7 | 8
  parity: 'none' | 'even' | 'odd'
  stopBits: 1 | 2
}

/** Opens a port. Resolves with a stream that is open; rejects with the reason why it could not be opened. */
export type OpenPort = (path: string, settings: SerialSettings) => Promise<SerialPortStream>

type OpenPortOptions = {
  /** Where the simulator listens, for the paths `virtual:…`: `host:port` or the path of a local socket. */
  link?: string
  /** Most bytes that one read of a virtual port gives. */
  maxReadSize?: number
}

// The native binding is loaded only for a real port: a virtual room must run where it cannot be loaded.
async function bindingFor(path: string, { link, maxReadSize }: OpenPortOptions) {
  if (!path.startsWith('virtual:')) return (await import('@serialport/bindings-cpp')).autoDetect()
  if (!link) throw new Error(`${path} needs a simulator, and no link to one is set`)
  return createVirtualBinding({ link, maxReadSize })
}

/**
 * Chooses the binding by the path: `virtual:<bench>/<instrument>` is a line of the simulator, anything else a device.
 * Asserts the modem lines where there are any; their absence (a pseudo-terminal, some converters) is no fault.
 */
export function createOpenPort(options: OpenPortOptions): OpenPort {
  return async (path, settings) => {
    const binding = await bindingFor(path, options)
    const port = new SerialPortStream({ ...settings, path, binding, autoOpen: false })
    await new Promise<void>((resolve, reject) => port.open((error) => (error ? reject(error) : resolve())))
    await new Promise<void>((resolve) => port.set({ dtr: true, rts: true }, () => resolve()))
    return port
  }
}
