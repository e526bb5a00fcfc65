import { mkdirSync } from 'node:fs'
import { eq } from 'drizzle-orm'
import type { Page } from 'playwright/test'
import { openDatabase } from '#app/db/client.server.ts'
import { demoAccounts } from '#app/db/demo-accounts.server.ts'
import { people, runs } from '#app/db/schema.ts'
import { storeCapture } from '#app/runs/capture.server.ts'
import { bareCapture } from '#tests/support/bare-capture.ts'
import { drawBeamPhoto } from '#tests/support/beam-photo.ts'
import type { Site } from '#tests/support/site.ts'
import { expect, expectAccessible, test } from './fixtures.ts'

const pictures = 'test-results/pictures'
const benchPage = '/benches/bench-1'
const student = demoAccounts.find(({ role }) => role === 'student')

/** A reading of bench 1 at 200 V and 1.5 A in a run of its own, as the student would have captured it. */
async function captureReading(site: Site): Promise<void> {
  const db = await openDatabase(site.databaseUrl)
  const person = await db.query.people.findFirst({ where: eq(people.email, student?.email ?? '') })
  await db.update(runs).set({ endedAt: new Date() }).where(eq(runs.benchId, 'bench-1'))
  await storeCapture(db, { capture: bareCapture, personId: person?.id ?? '' })
  db.$client.close()
}

const photoOf = (page: Page) => page.getByRole('application', { name: 'The photo with its marks' })

/** Where a place of the photo is on the screen while all of it is shown. */
async function onScreen(page: Page, photo: { width: number }, place: { x: number; y: number }) {
  const box = await photoOf(page).boundingBox()
  if (!box) throw new Error('There is no photo on the page')
  return { x: box.x + (place.x / photo.width) * box.width, y: box.y + (place.y / photo.width) * box.width }
}

async function tap(page: Page, photo: { width: number }, place: { x: number; y: number }) {
  const { x, y } = await onScreen(page, photo, place)
  await page.mouse.click(x, y)
}

/** 'd = 8.201(13) cm' in cm. */
function diameterIn(text: string): { value: number; standardUncertainty: number } {
  const [, value = '', digits = ''] = /d = (\d\.\d+)\((\d+)\)/.exec(text) ?? []
  return {
    value: Number(value),
    standardUncertainty: Number(digits) / 10 ** (value.split('.')[1]?.length ?? 0),
  }
}

test('A photo of the beam is sent, marked, nudged and measured, and gives e/m; a partner does the same on a phone', async ({
  site,
  signInAs,
}) => {
  test.setTimeout(180_000)
  mkdirSync(pictures, { recursive: true })
  await captureReading(site)
  const photo = await drawBeamPhoto(8.2)
  const page = await signInAs('student', { path: benchPage })
  await page.getByRole('link', { name: 'measure from a photo of reading 1' }).click()
  await expect(page.getByRole('heading', { name: 'Photo of reading 1' })).toBeVisible()
  await expectAccessible(page)

  await test.step('what is no picture is refused beside the field, whatever it is called', async () => {
    const text = { name: 'beam.jpg', mimeType: 'image/jpeg', buffer: Buffer.from('no picture') }
    await page.getByLabel('Photo of the beam with its scale').setInputFiles(text)
    await page.getByRole('button', { name: 'Send the photo' }).click()
    await expect(
      page.getByRole('alert').filter({ hasText: 'not a picture in JPEG, PNG or WebP' }),
    ).toBeVisible()
    await expectAccessible(page)
  })

  await test.step('the photo is sent and shown', async () => {
    const file = { name: 'beam.jpg', mimeType: 'image/jpeg', buffer: photo.bytes }
    await page.getByLabel('Photo of the beam with its scale').setInputFiles(file)
    const shown = page.waitForResponse((response) => /\/photos\/[^/]+$/.test(response.url()))
    await page.getByRole('button', { name: 'Send the photo' }).click()
    expect((await shown).headers()['content-type']).toBe('image/jpeg')
    await expect(photoOf(page)).toBeVisible()
  })

  const diameter = page.getByRole('region', { name: 'Diameter' })
  await test.step('two lines of the scale are marked and told what they read', async () => {
    await expect(diameter).toContainText('Mark two lines of the scale')
    await tap(page, photo, photo.lineAt(0))
    await tap(page, photo, photo.lineAt(12))
    await page.getByLabel('Scale mark 1, what it reads in cm').fill('0')
    await page.getByLabel('Scale mark 2, what it reads in cm').fill('13')
    await expect(page.getByText('The scale goes from 0 to 12 cm.')).toBeVisible()
    await page.getByLabel('Scale mark 2, what it reads in cm').fill('12')
    await expect(diameter).toContainText('Mark three points of the beam')
  })

  await test.step('points are set around the beam, one beside it', async () => {
    await page.getByLabel('a beam point').check()
    for (const degrees of [20, 65, 110, 155, 200, 250]) await tap(page, photo, photo.edgeAt(degrees))
    const { x, y } = photo.edgeAt(300)
    await tap(page, photo, { x: x + 44, y })
    await expect(diameter).toContainText('d = ')
  })

  await test.step('it is nudged onto the edge by the arrow keys, coarsely and finely', async () => {
    const point = page.getByRole('button', { name: 'beam point 7', exact: true })
    await expect(point).toBeFocused()
    const off = async () =>
      Math.abs(
        Number(
          (
            await page
              .getByRole('row', { name: /beam point 7/ })
              .getByRole('cell')
              .first()
              .textContent()
          )?.replace('−', '-'),
        ),
      )
    const before = await off()
    // An arrow moves by a two-hundredth of the 1600 pixels that are seen: eight, with Shift a tenth of that.
    for (let i = 0; i < 5; i++) await point.press('ArrowLeft')
    for (let i = 0; i < 5; i++) await point.press('Shift+ArrowLeft')
    const after = await off()
    expect(before).toBeGreaterThan(0.5)
    expect(after).toBeLessThan(0.1)
  })

  const measured = diameterIn((await diameter.textContent()) ?? '')
  expect(measured.standardUncertainty).toBeLessThan(0.03)
  expect(Math.abs(measured.value - 8.2)).toBeLessThan(3 * measured.standardUncertainty)

  await test.step('it stands in both lights, on a projector and on a phone, without a sideways scroll', async () => {
    for (const light of ['dark', 'lit'] as const) {
      await page.getByRole('button', { name: light, exact: true }).click()
      await expect(page.locator('html')).toHaveAttribute('data-light', light)
      for (const size of [
        { name: '360', width: 360, height: 800 },
        { name: '1080p', width: 1920, height: 1080 },
      ]) {
        await page.setViewportSize(size)
        await page.mouse.move(0, 0)
        const overflow = await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth)
        await page.screenshot({ path: `${pictures}/photo-${light}-${size.name}.png`, fullPage: true })
        expect(overflow, 'sideways scroll in px').toBeLessThanOrEqual(0)
        await expectAccessible(page)
      }
    }
    await page.setViewportSize({ width: 1280, height: 900 })
  })

  await test.step('it is saved, and the reading has its diameter and e/m from it', async () => {
    await page.getByRole('button', { name: 'Save the diameter' }).click()
    await expect(page.getByText('The diameter of reading 1 is saved.')).toBeVisible()
    const counts = page.getByRole('region', { name: 'What counts for this reading' })
    await expect(counts).toContainText(/Kofi Adeyemi: photo, 8\.\d+\(\d+\)/)
    await expect(counts).toContainText(/e\/m = 1\.\d+\(\d+\) × 10¹¹/)
    await page.getByRole('link', { name: 'To the logbook' }).click()
    const cells = page.getByRole('row', { name: /^1 / }).getByRole('cell')
    await expect(cells.nth(2)).toHaveText('photo')
    await expect(cells.nth(4)).toHaveText(measured.value.toFixed(2))
    await expect(cells.nth(5)).toHaveText(/^1\.\d+\(\d+\)$/)
    await expectAccessible(page)
  })

  await test.step('the partner enlarges it with two fingers on a phone and marks it for themselves', async () => {
    const phone = await signInAs('student', { email: 'partner@lab.test', path: benchPage })
    await phone.setViewportSize({ width: 360, height: 800 })
    await phone.getByRole('link', { name: 'measure from a photo of reading 1' }).click()
    await expect(photoOf(phone)).toBeVisible()
    await photoOf(phone).scrollIntoViewIfNeeded()

    for (const cm of [0, 12]) await tap(phone, photo, photo.lineAt(cm))
    await phone.getByLabel('Scale mark 1, what it reads in cm').fill('0')
    await phone.getByLabel('Scale mark 2, what it reads in cm').fill('12')
    await phone.getByLabel('a beam point').check()
    for (const degrees of [0, 60, 120, 180, 240, 300]) await tap(phone, photo, photo.edgeAt(degrees))
    const region = phone.getByRole('region', { name: 'Diameter' })
    await expect(region).toContainText('d = ')

    await pinch(phone, await onScreen(phone, photo, photo.edgeAt(0)), 3)
    await expect(phone.getByText('3.0 ×')).toBeVisible()
    await expect(phone.getByRole('row', { name: /beam point 7/ })).toHaveCount(0)
    await phone.getByRole('button', { name: 'beam point 1', exact: true }).focus()
    await phone.getByRole('button', { name: 'move beam point 1 right' }).click()
    await phone.getByRole('button', { name: 'move beam point 1 left' }).click()
    await phone.screenshot({ path: `${pictures}/photo-phone-enlarged.png`, fullPage: true })
    const theirs = diameterIn((await region.textContent()) ?? '')
    expect(Math.abs(theirs.value - 8.2)).toBeLessThan(0.1)
    await phone.getByRole('button', { name: 'Save the diameter' }).click()
    await expect(phone.getByText(/Runa Lindqvist: photo/)).toBeVisible()
    await expect(phone.getByText(/Kofi Adeyemi: photo/)).toBeVisible()
    await expectAccessible(phone)
  })
})

/** Two fingers that part around a place, until they are so many times as far from each other. */
async function pinch(page: Page, at: { x: number; y: number }, times: number) {
  const cdp = await page.context().newCDPSession(page)
  const fingers = (apart: number) => [
    { x: at.x - 40 - apart, y: at.y, id: 1 },
    { x: at.x - 40 + apart, y: at.y, id: 2 },
  ]
  const first = 20
  await cdp.send('Input.dispatchTouchEvent', { type: 'touchStart', touchPoints: fingers(first) })
  const steps = 8
  for (let step = 1; step <= steps; step++) {
    const apart = first * (1 + ((times - 1) * step) / steps)
    await cdp.send('Input.dispatchTouchEvent', { type: 'touchMove', touchPoints: fingers(apart) })
  }
  await cdp.send('Input.dispatchTouchEvent', { type: 'touchEnd', touchPoints: [] })
}
