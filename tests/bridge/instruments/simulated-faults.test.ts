import { afterEach, beforeEach, expect, test } from 'vitest'
import { LineError } from '#bridge/instruments/line-errors.ts'
import type { LineMode } from '#bridge/simulator/line-modes.ts'
import { lineDefaults } from '#bridge/simulator/line-modes.ts'
import { pause, protection, reached, until, virtualRoom } from './room.ts'

type VirtualRoom = Awaited<ReturnType<typeof virtualRoom>>
let room: VirtualRoom

beforeEach(async () => {
  room = await virtualRoom()
  await room.open()
  await room.supply.prepare(protection)
})
afterEach(async () => room.close())

const set = (mode: LineMode, value = lineDefaults[mode]) => {
  for (const name of ['supply', 'anode-meter', 'coil-meter', 'interlock'] as const) {
    room.simulator.line('bench-1', name).set({ mode, value })
  }
}

async function live(volts: number) {
  await room.supply.setVolts('anode', volts)
  await room.supply.switchOutput('anode', true)
  await until(
    () => room.anodeMeter.measure(),
    (value) => value !== null && Math.abs(value - volts) < 0.5,
  )
}

/** Measures while the line is bad: every number must be the tube's own, within what the instruments claim. */
async function checked(polls: number): Promise<{ read: number; missed: number }> {
  const count = { read: 0, missed: 0 }
  for (let poll = 0; poll < polls; poll++) {
    const asked = [room.supply.measure(), room.anodeMeter.measure(), room.interlock.measure()] as const
    const [supply, meter, interlock] = await Promise.allSettled(asked)
    const truth = room.bench.model.anodeVolts
    const volts = [
      supply.status === 'fulfilled' ? supply.value.anode.volts : null,
      meter.status === 'fulfilled' ? meter.value : null,
    ]
    for (const value of volts) {
      if (value !== null) expect(Math.abs(value - truth)).toBeLessThan(1)
      count[value === null ? 'missed' : 'read']++
    }
    if (interlock.status === 'fulfilled' && interlock.value !== null) {
      expect(interlock.value).toEqual({ eStopOut: true, enclosureClosed: true })
    }
    for (const outcome of [supply, meter, interlock]) {
      if (outcome.status === 'rejected') expect(outcome.reason).toBeInstanceOf(LineError)
    }
  }
  return count
}

test('fragmented answers are put together', async () => {
  await live(150)
  set('fragment')
  // A slow machine dribbles more slowly than the time limit allows now and then.
  const { read } = await checked(10)
  expect(read).toBeGreaterThan(10)
})

test('a flood of rubbish between the answers loses none and adds none', async () => {
  await live(150)
  set('flood', 5)
  expect(await checked(100)).toEqual({ read: 200, missed: 0 })
})

test('damaged answers are no readings, and the line recovers', async () => {
  await live(150)
  set('garble', 0.03)
  const { read, missed } = await checked(25)
  expect(read).toBeGreaterThan(0)
  expect(missed).toBeGreaterThan(0)
  set('good')
  for (const instrument of [room.supply, room.anodeMeter, room.interlock]) await reached(instrument, 'open')
  expect(await checked(5)).toEqual({ read: 10, missed: 0 })
})

test('answers later than the time limit are no readings, and never come as the next ones', async () => {
  await live(250)
  set('delay', 300)
  const slow = checked(2)
  expect(await slow).toEqual({ read: 0, missed: 4 })
  await room.supply.setVolts('anode', 20).catch((error: unknown) => error)
  set('good')
  await until(
    async () => room.bench.model.anodeVolts,
    (volts) => volts < 21,
  )
  await pause(300)
  expect(await checked(20)).toEqual({ read: 40, missed: 0 })
})

test('an urgent off takes effect over a line whose answers are damaged, late or drowned', async () => {
  for (const [mode, value] of [
    ['garble', 0.3],
    ['delay', 400],
    ['flood', 5],
    ['fragment', 2],
  ] as const) {
    set('good')
    await reached(room.supply, 'open')
    await live(100)
    set(mode, value)
    const polling = room.supply.measure().catch((error: unknown) => error)
    const start = performance.now()
    const off = room.supply.switchOutput('anode', false, { urgent: true }).catch((error: unknown) => error)
    await until(
      async () => room.bench.model.outputs.anode.isOn,
      (isOn) => !isOn,
    )
    // The time limit of the one command in flight is 250 ms.
    expect(performance.now() - start).toBeLessThan(400)
    await Promise.all([polling, off])
  }
})

test('a set whose confirmation is damaged is read back rather than repeated', async () => {
  set('garble', 0.04)
  let confirmed = 0
  for (let step = 1; step <= 40; step++) {
    const outcome = await room.supply.setVolts('anode', step).catch((error: unknown) => error)
    if (outcome === undefined) confirmed++
    else expect(outcome).toMatchObject({ name: 'LineError' })
    if (outcome === undefined) expect(room.bench.model.outputs.anode.volts).toBe(step)
    if (room.supply.status !== 'open') await reached(room.supply, 'open')
  }
  expect(confirmed).toBeGreaterThan(10)
})

test('a pulled cable is a lost line at once, and a plugged one finds every output commanded off', async () => {
  await live(200)
  const lost = reached(room.supply, 'lost')
  set('cut')
  expect(await lost).toBe('The line was cut')
  await expect(room.supply.measure()).rejects.toMatchObject({ fault: 'lost' })
  await expect(room.supply.switchOutput('anode', false, { urgent: true })).rejects.toMatchObject({
    fault: 'lost',
  })
  const again = reached(room.supply, 'open')
  set('good')
  await again
  expect(await room.supply.isOn('anode')).toBe(false)
})

test('a dead line is lost within two seconds of polling, and its watchdog has taken the outputs down', async () => {
  await live(200)
  const start = performance.now()
  const lost = reached(room.supply, 'lost')
  set('silent')
  await room.supply.measure().catch((error: unknown) => error)
  await lost
  expect(performance.now() - start).toBeLessThan(2000)
  const isOn = await until(
    async () => room.bench.model.outputs.anode.isOn,
    (on) => !on,
  )
  expect(isOn).toBe(false)
  expect(performance.now() - start).toBeLessThan(2500)
})

test('polls feed the watchdog, and the outputs go off when they stop', async () => {
  await live(100)
  const end = performance.now() + 2500
  while (performance.now() < end) {
    await room.supply.measure()
    await pause(100)
  }
  expect(room.bench.model.outputs.anode.isOn).toBe(true)
  await pause(2200)
  expect(room.bench.model.outputs.anode.isOn).toBe(false)
})

test('the e-stop and the enclosure are read apart', async () => {
  room.simulator.ask({ id: 1, ask: 'e-stop', bench: 'bench-1', in: true })
  expect(await room.interlock.measure()).toEqual({ eStopOut: false, enclosureClosed: true })
  room.simulator.ask({ id: 2, ask: 'e-stop', bench: 'bench-1', in: false })
  room.simulator.ask({ id: 3, ask: 'enclosure', bench: 'bench-1', open: true })
  expect(await room.interlock.measure()).toEqual({ eStopOut: true, enclosureClosed: false })
})

test('a supply that may not switch on says why: the interlock is open', async () => {
  room.simulator.ask({ id: 1, ask: 'enclosure', bench: 'bench-1', open: true })
  const refused = await room.supply.switchOutput('anode', true).catch((error: unknown) => error)
  expect(refused).toMatchObject({
    name: 'InstrumentRefusedError',
    number: -221,
    text: expect.stringMatching(/interlock open/),
  })
})
