import pino from 'pino'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { type ChannelValues, outputs as outputNames } from '#app/safety/types.ts'
import { createBus } from '#bridge/bus.ts'
import { monotonicClock } from '#bridge/clock.ts'
import { createInstrumentSet, type InstrumentSet } from '#bridge/instrument-set.ts'
import { createOpenPort, type OpenPort } from '#bridge/instruments/open-port.ts'
import { Outputs, OvertakenError } from '#bridge/outputs.ts'
import { noValues } from '#bridge/poll.ts'
import { createRoom } from '#bridge/room.ts'
import { demoScenario } from '#bridge/simulator/scenario.ts'
import { createSimulator, type Simulator } from '#bridge/simulator/simulator.ts'
import { quickBench } from '#tests/support/bridge.ts'
import { until } from '#tests/support/processes.ts'

let simulator: Simulator
let link: string
let instruments: InstrumentSet
let outputs: Outputs

const config = quickBench({}, 'bench-2')
const model = () => simulator.bench('bench-2').model
const supplyLine = () => simulator.line('bench-2', 'supply')

/** What an instrument without noise would read. */
const truth = (): ChannelValues => ({
  ...noValues(),
  anodeVolts: model().anodeVolts,
  coilAmps: Math.abs(model().signedCoilAmps),
  coilSupplyAmps: Math.abs(model().signedCoilAmps),
})

beforeEach(async () => {
  simulator = createSimulator({ scenario: demoScenario, seed: 3 })
  link = (await simulator.listen({ link: '127.0.0.1:0' })).link ?? ''
  instruments = createInstrumentSet(config, createOpenPort({ link }))
  outputs = new Outputs({
    clock: monotonicClock,
    instruments,
    limits: config.limits,
    values: truth,
    onChange: () => undefined,
  })
  instruments.supply.open()
  await until('the supply', () => instruments.supply.status === 'open')
  await outputs.prepare()
})
afterEach(async () => {
  outputs.drop(outputNames)
  await instruments.supply.close()
  await simulator.close()
})

/** Everything off, as a trip does it. */
function takeDown(): Promise<unknown> {
  outputs.drop(outputNames)
  return Promise.all(
    outputNames.map((output) => instruments.supply.switchOutput(output, false, { urgent: true })),
  )
}

/** Whether an output was ever on at the supply from now on, looked at every millisecond. */
function watch(output: 'heater' | 'anode' | 'coils'): () => boolean {
  let wasOn = false
  const timer = setInterval(() => {
    wasOn ||= model().outputs[output].isOn
  }, 1)
  return () => {
    clearInterval(timer)
    return wasOn
  }
}

describe('Outputs that are taken down while one is being switched on', () => {
  it.each(['heater', 'coils'] as const)('leave the %s off: no later step of it is sent', async (output) => {
    const { outputs: held } = model()
    supplyLine().set({ mode: 'delay', value: 60 })
    const work = (output === 'heater' ? outputs.switchHeater(true) : outputs.set('coils', 1)).catch(
      (error: unknown) => error,
    )
    if (output === 'heater') await until('its voltage', () => held.heater.volts > 6, 15_000)
    else await until('its preparing', () => held.coils.amps === 0, 15_000)
    const wasOn = watch(output)
    await takeDown()
    expect(await work).toBeInstanceOf(OvertakenError)
    await new Promise((resolve) => setTimeout(resolve, 400))
    expect(wasOn()).toBe(false)
    expect(outputs.views[output]).toMatchObject({ on: false, asked: 0, commanded: 0 })
  })
})

describe('A change of polarity', () => {
  beforeEach(async () => {
    await outputs.set('coils', 0.5)
    const feed = setInterval(() => void instruments.supply.measure().catch(() => undefined), 200)
    stopFeeding = () => clearInterval(feed)
    await until('the current', () => model().signedCoilAmps > 0.45)
  })
  let stopFeeding = () => {}
  afterEach(() => stopFeeding())

  it('that was not confirmed leaves the coils off, and the relay is set again before they go on', async () => {
    const line = supplyLine()
    const receive = line.receive.bind(line)
    line.receive = (bytes) => {
      // The relay moves, and the answer comes too late.
      if (bytes.includes('OUTP:POL INV')) line.set({ mode: 'delay', value: 300 })
      receive(bytes)
    }
    await expect(outputs.changePolarity(-1)).rejects.toMatchObject({ fault: 'unconfirmed' })
    line.receive = receive
    line.set({ mode: 'good', value: 0 })
    expect(outputs.polarityChanging).toBe(false)
    expect(outputs.views.coils).toMatchObject({ on: false, asked: 0, commanded: 0 })
    expect(outputs.polarity).toBe(1)
    // The heater is on, so that the supply is not prepared as a whole.
    await new Promise((resolve) => setTimeout(resolve, 700))
    await outputs.switchHeater(true)
    await outputs.set('coils', 0.5)
    await until('the current', () => Math.abs(model().signedCoilAmps) > 0.45)
    expect(model().signedCoilAmps).toBeGreaterThan(0)
  })

  it('marks the coils as off while their output is off', async () => {
    const line = supplyLine()
    const receive = line.receive.bind(line)
    let whileMoving: boolean | null = null
    line.receive = (bytes) => {
      if (bytes.includes('OUTP:POL INV')) whileMoving = outputs.views.coils.on
      receive(bytes)
    }
    expect(await outputs.changePolarity(-1)).toBe(true)
    expect(whileMoving).toBe(false)
    await until('the current', () => model().signedCoilAmps < -0.45)
    expect(outputs.views.coils).toMatchObject({ on: true, asked: 0.5 })
  })
})

describe('A room that is closed while a configuration is being changed', () => {
  it('leaves no port open', async () => {
    let open = 0
    const openPort: OpenPort = async (...asked) => {
      const port = await createOpenPort({ link })(...asked)
      open++
      port.on('close', () => open--)
      return port
    }
    const room = createRoom({
      openPort,
      clock: monotonicClock,
      presenceClock: monotonicClock,
      wallOf: (at) => at,
      bus: createBus(),
      log: pino({ level: 'silent' }),
      onEvent: () => undefined,
      onSummaries: () => undefined,
    })
    await instruments.supply.close()
    room.configure([config])
    await until('the ports', () => open === 4)
    room.configure([{ ...config, revision: config.revision + 1 }])
    await room.close()
    await new Promise((resolve) => setTimeout(resolve, 300))
    expect(open).toBe(0)
  })
})
