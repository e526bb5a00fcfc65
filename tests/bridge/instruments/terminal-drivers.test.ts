import { expect, test } from 'vitest'
import { createOpenPort } from '#bridge/instruments/open-port.ts'
import { supplyProfile } from '#bridge/instruments/profiles.ts'
import { describeDrivers } from './driver-cases.ts'
import { joinTerminals, serveBench, terminalFolder } from './pseudo-terminals.ts'
import { connect, protection, reached } from './room.ts'

const openPort = createOpenPort({})

async function terminalRoom() {
  const { folder, remove } = await terminalFolder()
  const join = (name: string) => joinTerminals(folder, name)
  const [supply, anodeMeter, coilMeter, interlock] = await Promise.all([
    join('supply'),
    join('anode-meter'),
    join('coil-meter'),
    join('interlock'),
  ])
  const far = { supply: supply.far, 'anode-meter': anodeMeter.far, 'coil-meter': coilMeter.far }
  const bench = await serveBench({ ...far, interlock: interlock.far })
  const room = connect(openPort, {
    supply: supply.near,
    anodeMeter: anodeMeter.near,
    coilMeter: coilMeter.near,
    interlock: interlock.near,
  })
  return {
    room,
    async close() {
      await room.close()
      await bench.stop()
      await Promise.all([supply, anodeMeter, coilMeter, interlock].map((pair) => pair.unplug()))
      await remove()
    },
  }
}

describeDrivers('a real pseudo-terminal', terminalRoom)

test('a pulled terminal is a lost line, and the line is open again once it is plugged', async () => {
  const { folder, remove } = await terminalFolder()
  let pair = await joinTerminals(folder, 'supply')
  let bench = await serveBench({ supply: pair.far })
  const nowhere = 'virtual:bench-1/none'
  const { supply } = connect(openPort, {
    supply: pair.near,
    anodeMeter: nowhere,
    coilMeter: nowhere,
    interlock: nowhere,
  })
  const opened = reached(supply, 'open')
  supply.open()
  await opened
  await supply.prepare(protection)
  const lost = reached(supply, 'lost')
  await pair.unplug()
  // A hung-up terminal may read as empty for ever: what tells is the next poll.
  await expect(supply.measure()).rejects.toMatchObject({ fault: 'lost' })
  expect(await lost).toBeTruthy()
  await expect(supply.measure()).rejects.toMatchObject({ fault: 'lost' })
  await bench.stop()
  const again = reached(supply, 'open')
  pair = await joinTerminals(folder, 'supply')
  bench = await serveBench({ supply: pair.far })
  await again
  expect(await supply.isOn('anode')).toBe(false)
  await supply.close()
  await bench.stop()
  await pair.unplug()
  await remove()
})

test('a device that is not there cannot be opened, and the reason names it', async () => {
  const { folder, remove } = await terminalFolder()
  const serial = supplyProfile('scpi-triple-supply').serial
  await expect(openPort(`${folder}/none`, serial)).rejects.toThrow(/No such file/)
  await remove()
})
