import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { InstrumentRefusedError } from '#bridge/instruments/line-errors.ts'
import { protection, type Room, until } from './room.ts'

const near = (value: number | null, wanted: number, by: number) =>
  value !== null && Math.abs(value - wanted) <= by

/** What the drivers do over a good line, whatever kind of line it is. */
export function describeDrivers(
  kind: string,
  setUp: () => Promise<{ room: Room; close(): Promise<void> }>,
): void {
  describe(`the drivers over ${kind}`, () => {
    let room: Room
    let close: () => Promise<void>

    beforeAll(async () => {
      const made = await setUp()
      room = made.room
      close = made.close
      await room.open()
    })

    afterAll(async () => close())

    test('a supply that was left on is off and at zero once it is prepared', async () => {
      await room.supply.setVolts('heater', 6)
      await room.supply.setVolts('anode', 100)
      await room.supply.setAmps('coils', 1)
      for (const output of ['heater', 'anode', 'coils'] as const) await room.supply.switchOutput(output, true)
      expect(await room.supply.isOn('anode')).toBe(true)
      await room.supply.prepare(protection)
      for (const output of ['heater', 'anode', 'coils'] as const)
        expect(await room.supply.isOn(output)).toBe(false)
      await room.supply.switchOutput('anode', true)
      const volts = await until(
        async () => (await room.supply.measure()).anode.volts,
        (value) => near(value, 0, 0.3),
      )
      expect(Math.abs(volts ?? 99)).toBeLessThanOrEqual(0.3)
      await room.supply.switchOutput('anode', false)
    })

    test('what is set is what the supply and the independent meters read', async () => {
      await room.supply.prepare(protection)
      await room.supply.setVolts('anode', 200)
      await room.supply.setAmps('coils', 1.5)
      await room.supply.switchOutput('anode', true)
      await room.supply.switchOutput('coils', true)
      const anode = await until(
        () => room.anodeMeter.measure(),
        (value) => near(value, 200, 0.5),
      )
      const coils = await until(
        () => room.coilMeter.measure(),
        (value) => near(value, 1.5, 0.01),
      )
      expect(Math.abs((anode ?? 0) - 200)).toBeLessThan(1)
      expect(Math.abs((coils ?? 0) - 1.5)).toBeLessThan(0.02)
      const reading = await room.supply.measure()
      expect(Math.abs((reading.anode.volts ?? 0) - 200)).toBeLessThan(1)
      expect(Math.abs((reading.coils.amps ?? 0) - 1.5)).toBeLessThan(0.02)
      expect(reading.coils.volts).toBeGreaterThan(5)
      expect(Math.abs(reading.heater.volts ?? 9)).toBeLessThan(0.05)
    })

    test('a set above the range of the instrument is refused with its number and text, and harms nothing after it', async () => {
      const refused = await room.supply.setVolts('anode', 900).catch((error: unknown) => error)
      expect(refused).toBeInstanceOf(InstrumentRefusedError)
      // SCPI-1999 volume 2, 21.8.10: -222 is "Data out of range".
      expect(refused).toMatchObject({ number: -222, text: expect.stringMatching(/^Data out of range/) })
      await expect(room.supply.setVolts('anode', 10)).resolves.toBeUndefined()
    })

    test('a change of polarity is refused while the coils carry current, and done once they do not', async () => {
      await room.supply.setAmps('coils', 1)
      await room.supply.switchOutput('coils', true)
      await until(
        () => room.coilMeter.measure(),
        (value) => near(value, 1, 0.02),
      )
      const refused = await room.supply.setPolarity(-1).catch((error: unknown) => error)
      // SCPI-1999 volume 2, 21.8.10: -221 is "Settings conflict".
      expect(refused).toMatchObject({ name: 'InstrumentRefusedError', number: -221 })
      await room.supply.switchOutput('coils', false)
      await until(
        () => room.coilMeter.measure(),
        (value) => near(value, 0, 0.005),
      )
      await expect(room.supply.setPolarity(-1)).resolves.toBeUndefined()
      await expect(room.supply.setPolarity(1)).resolves.toBeUndefined()
    })

    test('a setting that is no number never reaches the instrument', async () => {
      for (const volts of [Number.NaN, Number.POSITIVE_INFINITY, -1]) {
        await expect(room.supply.setVolts('anode', volts)).rejects.toThrow(RangeError)
      }
    })

    test('the interlock unit is read as it stands', async () => {
      expect(await room.interlock.measure()).toEqual({ eStopOut: true, enclosureClosed: true })
    })

    test('a full poll takes well under 50 ms', async () => {
      const times: number[] = []
      for (let poll = 0; poll < 100; poll++) {
        const start = performance.now()
        await Promise.all([
          room.supply.measure(),
          room.anodeMeter.measure(),
          room.coilMeter.measure(),
          room.interlock.measure(),
        ])
        times.push(performance.now() - start)
      }
      const median = times.sort((a, b) => a - b)[50]
      expect(median).toBeLessThan(20)
    })
  })
}
