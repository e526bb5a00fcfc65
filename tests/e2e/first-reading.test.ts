import { readEdges } from '#tests/support/read-edges.ts'
import { askSimulator } from '#tests/support/simulator-asks.ts'
import { leave } from './bench-steps.ts'
import { expect, expectAccessible, test } from './fixtures.ts'

/** A value written 1.749(19), in 10¹¹ C/kg. */
function concise(text: string): { value: number; standardUncertainty: number } {
  const [, value = '', digits = ''] = /(\d\.\d+)\((\d+)\)/.exec(text) ?? []
  const decimals = value.split('.')[1]?.length ?? 0
  return { value: Number(value), standardUncertainty: Number(digits) / 10 ** decimals }
}

test('A newcomer brings the tube up, captures a reading, reads the edges off the picture, and sees e/m', async ({
  site,
  signInAs,
}) => {
  // Three pixels a point: a reader leans closer, or enlarges the picture.
  const page = await signInAs('student', { deviceScaleFactor: 3 })
  // A tall page keeps the whole tube in one picture.
  await page.setViewportSize({ width: 1280, height: 1600 })
  await page.getByRole('link', { name: /Bench 1/ }).click()
  await page.waitForURL('**/benches/bench-1')
  await page.getByRole('button', { name: 'dark', exact: true }).click()

  await test.step('acknowledges the cautions', async () => {
    await page
      .getByRole('link', { name: /cautions/i })
      .first()
      .click()
    await expectAccessible(page)
    await page.getByRole('button', { name: 'I have read these and will keep to them' }).click()
  })

  await test.step('takes the controls and warms up', async () => {
    await page.getByRole('button', { name: 'Take the controls' }).click()
    await page.getByRole('button', { name: 'Heater on' }).click()
    await expect(page.getByText('Set the anode voltage')).toBeVisible({ timeout: 30_000 })
  })

  await test.step('sets 200 V and 1.5 A', async () => {
    const anode = page.getByLabel(/^Anode.*, V, at most/i)
    await anode.fill('200')
    await anode.press('Enter')
    const coils = page.getByLabel(/^Coil.*, A, at most/i)
    await coils.fill('1.5')
    await coils.press('Enter')
  })

  await test.step('waits until settled, and captures', async () => {
    await expect(page.getByText('Both channels are settled')).toBeVisible({ timeout: 40_000 })
    await page.getByRole('button', { name: 'Capture' }).click()
    await expect(page.getByLabel('Reading 1, left edge in cm')).toBeVisible()
  })

  const edges = await test.step('reads both edges off the pixels', async () => {
    const tube = page.getByRole('img', { name: /^The tube with a scale of 12 cm/ })
    await page.mouse.move(0, 0)
    const picture = await tube.screenshot({ scale: 'device' })
    await test.info().attach('tube', { body: picture, contentType: 'image/png' })
    return readEdges(picture, { first: 0, last: 12 })
  })

  const result = await test.step('enters them and sees e/m with its uncertainty', async () => {
    await page.getByLabel('Reading 1, left edge in cm').fill(edges.left.toFixed(2))
    await page.getByLabel('Reading 1, right edge in cm').fill(edges.right.toFixed(2))
    await page.getByRole('button', { name: 'Enter edges' }).click()
    const cell = page.getByRole('row', { name: /^1 / }).getByRole('cell').nth(5)
    await expect(cell).toHaveText(/^\d\.\d+\(\d+\)$/)
    return concise((await cell.textContent()) ?? '')
  })

  const live = page.getByText(/± \d\.\d+ at 95 %/)
  await expect(live).toBeVisible()
  const expanded = Number(/± (\d\.\d+) at 95 %/.exec((await live.textContent()) ?? '')?.[1])
  const truth = await askSimulator<{ chargeToMass: number }>(site.simulatorTest, 'truth', 'bench-1')

  expect(expanded / result.value, 'expanded uncertainty, relative').toBeLessThan(0.03)
  expect(expanded, 'expanded uncertainty is more than the standard one').toBeGreaterThan(
    result.standardUncertainty,
  )
  expect(
    Math.abs(result.value - truth.chargeToMass / 1e11),
    'deviation from the constant in the simulator',
  ).toBeLessThan(expanded)
  await expectAccessible(page)
  await test.step('leaves the bench off, and the controls free', () => leave(page))
})
