import { once } from 'node:events'
import { SerialPortStream } from '@serialport/stream'
import { expect, test } from 'vitest'
import { createOpenPort } from '#bridge/instruments/open-port.ts'
import { interlockProfile, meterProfile, outputRange, supplyProfile } from '#bridge/instruments/profiles.ts'
import { createVirtualBinding } from '#bridge/instruments/virtual-binding.ts'
import { demoScenario } from '#bridge/simulator/scenario.ts'
import { virtualPaths, virtualRoom } from './room.ts'

const serial = supplyProfile('scpi-triple-supply').serial

test('what is written to a virtual port reaches the simulator, and its answer comes back', async () => {
  const room = await virtualRoom()
  const port = await room.openPort(virtualPaths.supply, serial)
  expect(port).toBeInstanceOf(SerialPortStream)
  port.write('*OPC?\n')
  const [data] = (await once(port, 'data')) as [Buffer]
  expect(data.toString()).toBe('1\n')
  await new Promise<void>((resolve) => port.close(() => resolve()))
  await room.close()
})

test('a read gives no more bytes than its greatest size', async () => {
  const room = await virtualRoom()
  const binding = createVirtualBinding({ link: room.link, maxReadSize: 3 })
  const port = new SerialPortStream({ ...serial, binding, path: virtualPaths.supply })
  await once(port, 'open')
  const pieces: string[] = []
  const whole = new Promise<void>((resolve) => {
    port.on('data', (data: Buffer) => {
      pieces.push(data.toString())
      if (data.includes('\n')) resolve()
    })
  })
  port.write('SYST:VERS?;*OPC?\n')
  await whole
  expect(pieces.join('')).toBe('1999.0;1\n')
  expect(Math.max(...pieces.map(({ length }) => length))).toBe(3)
  await new Promise<void>((resolve) => port.close(() => resolve()))
  await room.close()
})

test('the end of the link is an unplugged cable; a wanted close is not', async () => {
  const room = await virtualRoom()
  const pulled = await room.openPort(virtualPaths.supply, serial)
  pulled.resume()
  const closed = once(pulled, 'close')
  room.simulator.line('bench-1', 'supply').set({ mode: 'cut', value: 0 })
  const [error] = await closed
  expect(error).toMatchObject({ disconnected: true })
  room.simulator.line('bench-1', 'supply').set({ mode: 'good', value: 0 })
  const wanted = await room.openPort(virtualPaths.supply, serial)
  const ended = once(wanted, 'close')
  wanted.close()
  expect((await ended)[0]).toBeNull()
  await room.close()
})

test('a port that the simulator does not have is refused with its reason', async () => {
  const room = await virtualRoom()
  await expect(room.openPort('virtual:bench-9/supply', serial)).rejects.toThrow(/bench-9/)
  await expect(room.openPort('virtual:bench-1/toaster', serial)).rejects.toThrow(/toaster/)
  await expect(room.openPort('virtual:supply', serial)).rejects.toThrow('No virtual port: virtual:supply')
  await expect(createOpenPort({})(virtualPaths.supply, serial)).rejects.toThrow(/no link/)
  await room.close()
})

test('a simulator that is not there is told as such', async () => {
  const room = await virtualRoom()
  await room.close()
  await expect(room.openPort(virtualPaths.supply, serial)).rejects.toThrow(/ECONNREFUSED/)
})

test('the profiles state the ranges of the virtual instruments', () => {
  const profile = supplyProfile('scpi-triple-supply')
  for (const bench of demoScenario.benches) {
    for (const output of ['heater', 'anode', 'coils'] as const) {
      expect(outputRange(profile, output, 'volts').maximum).toBe(bench.outputs[output].voltsRange)
      expect(outputRange(profile, output, 'amps').maximum).toBe(bench.outputs[output].ampsRange)
    }
    expect(meterProfile('scpi-volt-meter').range.maximum).toBe(bench.anodeMeter.range)
    expect(meterProfile('scpi-ampere-meter').range.maximum).toBe(bench.coilMeter.range)
  }
})

test('an unknown profile is refused by name', () => {
  for (const find of [supplyProfile, meterProfile, interlockProfile]) {
    expect(() => find('none')).toThrow("No instrument profile 'none'")
    expect(() => find('toString')).toThrow(RangeError)
  }
})
