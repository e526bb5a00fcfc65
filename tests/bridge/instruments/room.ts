import { createInterlockUnit } from '#bridge/instruments/interlock-unit.ts'
import { createMeter } from '#bridge/instruments/meter.ts'
import { createOpenPort, type OpenPort } from '#bridge/instruments/open-port.ts'
import { interlockProfile, meterProfile, supplyProfile } from '#bridge/instruments/profiles.ts'
import { createSupply } from '#bridge/instruments/supply.ts'
import type { Instrument, PortStatus, SupplyProtection } from '#bridge/instruments/types.ts'
import { demoScenario } from '#bridge/simulator/scenario.ts'
import { createSimulator } from '#bridge/simulator/simulator.ts'

export const protection: SupplyProtection = {
  anodeVolts: 320,
  anodeAmps: 0.015,
  coilAmps: 2.2,
  heaterVolts: 7,
  watchdogSeconds: 2,
}

export type Paths = { supply: string; anodeMeter: string; coilMeter: string; interlock: string }
export type Room = ReturnType<typeof connect>

export const virtualPaths: Paths = {
  supply: 'virtual:bench-1/supply',
  anodeMeter: 'virtual:bench-1/anode-meter',
  coilMeter: 'virtual:bench-1/coil-meter',
  interlock: 'virtual:bench-1/interlock',
}

/** The four drivers of a bench, over lines that are still closed. */
export function connect(openPort: OpenPort, paths: Paths) {
  const drivers = {
    supply: createSupply({
      name: 'supply',
      openPort,
      path: paths.supply,
      profile: supplyProfile('scpi-triple-supply'),
      channels: { heater: 1, anode: 2, coils: 3 },
    }),
    anodeMeter: createMeter({
      name: 'anode meter',
      openPort,
      path: paths.anodeMeter,
      profile: meterProfile('scpi-volt-meter'),
    }),
    coilMeter: createMeter({
      name: 'coil meter',
      openPort,
      path: paths.coilMeter,
      profile: meterProfile('scpi-ampere-meter'),
    }),
    interlock: createInterlockUnit({
      name: 'interlock',
      openPort,
      path: paths.interlock,
      profile: interlockProfile('scpi-interlock'),
    }),
  }
  const all: Instrument[] = Object.values(drivers)
  return {
    ...drivers,
    async open() {
      const opened = all.map((instrument) => reached(instrument, 'open'))
      for (const instrument of all) instrument.open()
      await Promise.all(opened)
    },
    async close() {
      await Promise.all(all.map((instrument) => instrument.close()))
    },
  }
}

/** Resolves with the reason when an instrument has come to a status; at once when it is there already. */
export function reached(
  instrument: Pick<Instrument, 'status' | 'onStatus'>,
  wanted: PortStatus,
): Promise<string | null> {
  if (instrument.status === wanted) return Promise.resolve(null)
  return new Promise((resolve) => {
    instrument.onStatus((status, reason) => {
      if (status === wanted) resolve(reason)
    })
  })
}

export const pause = (milliseconds: number) =>
  new Promise<void>((resolve) => setTimeout(resolve, milliseconds))

/** Reads until `isThere`, at most for `seconds`; resolves with the last value read. */
export async function until<T>(
  read: () => Promise<T>,
  isThere: (value: T) => boolean,
  seconds = 3,
): Promise<T> {
  const end = performance.now() + seconds * 1000
  for (;;) {
    const value = await read()
    if (isThere(value) || performance.now() > end) return value
    await pause(10)
  }
}

/** A simulator in this process and the drivers of its first bench. */
export async function virtualRoom(options: { maxReadSize?: number } = {}) {
  const simulator = createSimulator({ scenario: demoScenario, seed: 11 })
  const { link } = await simulator.listen({ link: '127.0.0.1:0' })
  if (link === null) throw new Error('The simulator has no link socket')
  const openPort = createOpenPort({ link, ...options })
  const room = connect(openPort, virtualPaths)
  return {
    ...room,
    simulator,
    link,
    openPort,
    bench: simulator.bench('bench-1'),
    async close() {
      await room.close()
      await simulator.close()
    },
  }
}
