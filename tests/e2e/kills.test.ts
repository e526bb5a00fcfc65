import { createClient } from '@libsql/client'
import { askSimulator } from '#tests/support/simulator-asks.ts'
import type { Site } from '#tests/support/site.ts'
import {
  acknowledgeCautions,
  expectTerminal,
  leave,
  set,
  takeControls,
  terminalVolts,
  warmUp,
} from './bench-steps.ts'
import { expect, test } from './fixtures.ts'

// What dies takes its connections along: the browser says so in its console.
test.use({
  faultsAllowed: /WebSocket connection|ERR_CONNECTION_REFUSED|Failed to fetch|Failed to load resource/,
})

type Setpoints = { anodeVolts: number; on: { heater: boolean; anode: boolean; coils: boolean } }

test('A bridge killed while live leaves no voltage behind, and commands off what it finds when it comes back', async ({
  site,
  signInAs,
}) => {
  const benchId = 'bench-2'
  const page = await signInAs('instructor')
  await acknowledgeCautions(page, benchId)
  await takeControls(page)
  await warmUp(page)
  await set(page, { volts: 150, amps: 1 })
  await expect(page.getByText(/150\.0\sV reached/)).toBeVisible({ timeout: 20_000 })

  const killed = Date.now()
  await site.stop('bridge', 'SIGKILL')
  await expect
    .poll(() => terminalVolts(site, benchId), { intervals: [50], timeout: 2_000 - (Date.now() - killed) })
    .toBeLessThan(5)
  await expect(page.getByText(/voltage unknown.*treat .*as live/i).first()).toBeVisible()
  const held = await askSimulator<Setpoints>(site.simulatorTest, 'setpoints', benchId)
  expect(held.anodeVolts, 'the supply still holds the old setpoint').toBeGreaterThan(100)

  await site.start('bridge')
  await expect
    .poll(async () => (await askSimulator<Setpoints>(site.simulatorTest, 'setpoints', benchId)).anodeVolts)
    .toBe(0)
  const after = await askSimulator<Setpoints>(site.simulatorTest, 'setpoints', benchId)
  expect(after.on).toEqual({ heater: false, anode: false, coils: false })
  await expect(page.getByText(/voltage unknown.*treat .*as live/i)).toHaveCount(0, { timeout: 20_000 })
})

test('With the web application killed, trips and make safe still work, also from a page that reconnects', async ({
  site,
  signInAs,
}) => {
  test.setTimeout(420_000)
  const benchId = 'bench-1'
  const page = await signInAs('technician')
  await acknowledgeCautions(page, benchId)
  await takeControls(page)
  await warmUp(page)
  const goLive = async () => {
    await set(page, { volts: 200, amps: 1.5 })
    await expectTerminal(site, benchId, 'live')
  }
  await goLive()
  const before = await readingsStored(site, benchId)
  for (const reading of [1, 2, 3].map((more) => before.length + more)) {
    const capture = page.getByRole('button', { name: 'Capture' })
    await expect(capture).toHaveAttribute('aria-disabled', 'false', { timeout: 40_000 })
    await capture.click()
    await expect(page.getByRole('row', { name: new RegExp(`^${reading} `) })).toBeVisible()
  }

  await test.step('killed: make safe works from the page that stayed open', async () => {
    await site.stop('app', 'SIGKILL')
    await page.getByRole('button', { name: /^Make safe/ }).click()
    await expectTerminal(site, benchId, 'down')
    await expect(page.getByText(/off commanded/i).first()).toBeVisible()
  })

  await test.step('back, and killed again: make safe works from a page that lost its line and reconnects', async () => {
    await site.start('app')
    await warmUp(page)
    await goLive()
    await site.stop('app', 'SIGKILL')
    const network = await page.context().newCDPSession(page)
    await network.send('Network.enable')
    await page.context().setOffline(true)
    await page.evaluate(() => window.dispatchEvent(new Event('offline')))
    await page.waitForTimeout(1_000)
    await page.context().setOffline(false)
    await page.waitForTimeout(6_000)
    await page.getByRole('button', { name: /^Make safe/ }).click()
    await expectTerminal(site, benchId, 'down')
  })

  await test.step('back, and killed again: a trip still takes the terminal down', async () => {
    await site.start('app')
    await warmUp(page)
    await goLive()
    await site.stop('app', 'SIGKILL')
    await askSimulator(site.simulatorTest, 'enclosure', benchId, { open: true })
    await expect(page.getByRole('region', { name: 'Trip' })).toContainText(/enclosure was opened/)
    await expectTerminal(site, benchId, 'down')
    await askSimulator(site.simulatorTest, 'enclosure', benchId, { open: false })
  })

  await test.step('back: no event is missing or doubled, and every reading is there once', async () => {
    await site.start('app')
    await expect.poll(() => tripsStored(site, benchId), { timeout: 20_000 }).toBe(1)
    const database = createClient({ url: site.databaseUrl })
    const { rows } = await database.execute(
      "select sequence from bench_events where bridge_id = 'room-1' order by sequence",
    )
    const sequences = rows.map((row) => Number(row.sequence))
    const first = sequences[0] ?? 0
    expect(sequences).toEqual(sequences.map((_, index) => first + index))
    database.close()
    const numbers = await readingsStored(site, benchId)
    expect(numbers).toHaveLength(before.length + 3)
    expect(numbers).toEqual(numbers.map((_, index) => index + 1))
  })

  await test.step('and the bench can be used again', async () => {
    const reset = page
      .getByRole('region', { name: 'Trip' })
      .getByRole('button', { name: 'Reset', exact: true })
    await expect(reset).toHaveAttribute('aria-disabled', 'false', { timeout: 60_000 })
    await reset.click()
    await expect(page.getByRole('region', { name: 'Trip' })).toBeHidden()
    await leave(page)
  })
})

/** Trips of the enclosure in the database of the app. */
async function tripsStored(site: Site, benchId: string): Promise<number> {
  const database = createClient({ url: site.databaseUrl })
  const { rows } = await database.execute({
    sql: "select count(*) as trips from bench_events where bench_id = ? and kind = 'trip'",
    args: [benchId],
  })
  database.close()
  return Number(rows[0]?.trips)
}

/** Numbers of the readings of the bench's open run in the database of the app. */
async function readingsStored(site: Site, benchId: string): Promise<number[]> {
  const database = createClient({ url: site.databaseUrl })
  const { rows } = await database.execute({
    sql: `select number from readings where run_id in
      (select id from runs where bench_id = ? and ended_at is null) order by number`,
    args: [benchId],
  })
  database.close()
  return rows.map((row) => Number(row.number))
}
