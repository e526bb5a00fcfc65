import type { Page } from 'playwright/test'
import { openDatabase } from '#app/db/client.server.ts'
import { demoTypedBench } from '#app/db/demo-benches.ts'
import { benches, benchRevisions } from '#app/db/schema.ts'
import type { TypedBench } from '#app/protocol/bench-config.ts'
import type { Site } from '#tests/support/site.ts'
import { acknowledgeCautions } from './bench-steps.ts'
import { expectEveryLook } from './every-look.ts'
import { expect, expectAccessible, test } from './fixtures.ts'

async function tickAll(page: Page): Promise<void> {
  for (const box of await page.getByRole('checkbox').all()) await box.check()
  await page.getByRole('button', { name: 'I have looked at each of these' }).click()
  await expect(page.getByText('Ticked for this run by')).toBeVisible()
}

async function typeMeters(page: Page, volts: string, amps: string): Promise<void> {
  await page.getByLabel('Anode voltage, V').fill(volts)
  await page.getByLabel('Coil current, A').fill(amps)
  await page.getByRole('button', { name: 'Enter the reading' }).click()
}

test('At a bench without ports a student ticks the checklist, types the meters, reads the edges, and sees e/m', async ({
  signInAs,
}) => {
  test.setTimeout(180_000)
  // Of the demo's students the one who acknowledges the cautions in no other story before.
  const page = await signInAs('student', { email: 'partner@lab.test' })

  await test.step('the hall says that it is not watched, and offers no make safe for it', async () => {
    const tile = page.getByRole('article', { name: 'Bench 4' })
    await expect(tile.getByText('no instruments: not watched')).toBeVisible()
    await expect(tile.getByRole('button')).toHaveCount(0)
    await expect(tile).not.toContainText(/\boff\b|\blive\b|settled/)
    await expect(page.getByRole('heading', { level: 1 })).toContainText('1 not watched')
    await tile.getByRole('link', { name: /Bench 4/ }).click()
  })

  await test.step('nothing can be ticked or typed before the cautions are acknowledged', async () => {
    await expect(page.getByText('Switch off at the supplies')).toBeVisible()
    await expect(page.getByRole('button', { name: 'Make safe' })).toHaveCount(0)
    await expect(page.getByRole('checkbox').first()).toBeDisabled()
    await expect(page.getByLabel('Anode voltage, V')).toBeDisabled()
    await expectAccessible(page)
    await acknowledgeCautions(page, 'bench-4')
  })

  await test.step('a contact that is not ticked is named', async () => {
    await page.getByRole('checkbox', { name: /^leads/ }).check()
    await page.getByRole('button', { name: 'I have looked at each of these' }).click()
    await expect(page.getByRole('alert').filter({ hasText: 'Not ticked: enclosure, e-stop' })).toBeVisible()
    await expectEveryLook(page, 'typed-checklist')
    await tickAll(page)
    await expect(page.getByText('It tells what was seen then.')).toBeVisible()
  })

  await test.step('a voltage above the bench’s limit is refused beside its field, and stays as it was typed', async () => {
    await typeMeters(page, '2004', '1.52')
    await expect(page.getByRole('alert').filter({ hasText: 'limit of 280 V' })).toBeVisible()
    await expect(page.getByLabel('Anode voltage, V')).toHaveValue('2004')
  })

  await test.step('V and I as the meters show them become a reading, marked typed', async () => {
    await typeMeters(page, '200,4', '1.52')
    const row = page.getByRole('row', { name: /^1 / })
    await expect(row.getByText('typed', { exact: true })).toBeVisible()
    await expect(row.getByText('outer edges of the beam')).toBeVisible()
    // ±(0.5 % + 0.1 V)/√3 and 0.1 V/√12: 0.64 V.
    await expect(row.getByRole('cell').first()).toHaveText('200.40(64)')
  })

  await test.step('the edges give e/m with its uncertainty', async () => {
    await page.getByLabel('Reading 1, left edge in cm').fill('2.4')
    await page.getByLabel('Reading 1, right edge in cm').fill('11,9')
    await page.getByRole('button', { name: 'Enter edges' }).click()
    const cells = page.getByRole('row', { name: /^1 / }).getByRole('cell')
    await expect(cells.nth(5)).toHaveText(/^1\.\d+\(\d+\)$/)
    // 9.5 cm on a ruler 8.5 cm behind the beam, seen from 60 cm.
    await expect(cells.nth(4)).toHaveText('8.15')
    await expect(page.getByRole('region', { name: 'e/m' })).toContainText(/× 10¹¹ C\/kg± \d\.\d+ at 95 %/)
    await expectEveryLook(page, 'typed')
  })

  await test.step('the log tells who ticked the checklist', async () => {
    await page.getByRole('link', { name: 'all of it' }).click()
    await expect(page.getByRole('cell', { name: 'The checklist of the chain was ticked.' })).toBeVisible()
    await expectAccessible(page)
  })
})

/** A bench of staff's own beside those of the class, read at rungs. */
async function commissionRungBench(site: Site): Promise<void> {
  const config: TypedBench = {
    ...demoTypedBench,
    benchId: 'bench-5',
    name: 'Bench 5',
    place: 'store room',
    scale: {
      kind: 'rungs',
      rungs: [0.04, 0.06, 0.08, 0.1].map((distanceMetres) => ({
        name: `${Math.round(distanceMetres * 100)} cm`,
        distanceMetres,
      })),
      uDistanceMetres: 0.0002,
    },
  }
  const { benchId, revision, name, place } = config
  const db = await openDatabase(site.databaseUrl)
  await db.insert(benches).values({ id: benchId, name, place })
  await db.insert(benchRevisions).values({ benchId, revision, config })
  db.$client.close()
}

test('At a bench with rungs the one that the beam meets is chosen, with how far the current can be moved', async ({
  site,
  signInAs,
}) => {
  await commissionRungBench(site)
  const page = await signInAs('technician')
  await acknowledgeCautions(page, 'bench-5')
  await tickAll(page)
  await typeMeters(page, '200.4', '1.52')
  const row = page.getByRole('row', { name: /^1 / })
  await expect(row.getByText('outer edge of the beam on the rung')).toBeVisible()
  await expectEveryLook(page, 'rungs-entry')
  await page.getByRole('button', { name: 'Enter the rung' }).click()
  await expect(row.getByRole('alert').filter({ hasText: 'Choose the rung' })).toBeVisible()
  await row.getByRole('radio', { name: '8 cm' }).check()
  await row.getByLabel(/how far the current can be moved/).fill('0,012')
  await page.getByRole('button', { name: 'Enter the rung' }).click()
  await expect(row.getByRole('cell').nth(2)).toHaveText('8 cm')
  await expect(row.getByRole('cell').nth(3)).toHaveText('0.012')
  await expect(row.getByRole('cell').nth(4)).toHaveText('8.00')
  await expect(row.getByRole('cell').nth(5)).toHaveText(/^1\.\d+\(\d+\)$/)
})
