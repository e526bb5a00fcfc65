import { askSimulator } from '#tests/support/simulator-asks.ts'
import { acknowledgeCautions, anodeField, coilField, set, takeControls, warmUp } from './bench-steps.ts'
import { expect, expectAccessible, test } from './fixtures.ts'

test('A refused setpoint says which limit, whose it is and by how much, beside its field', async ({
  site,
  signInAs,
}) => {
  test.setTimeout(180_000)
  const benchId = 'bench-1'
  const page = await signInAs('instructor')
  await acknowledgeCautions(page, benchId)
  await takeControls(page)
  const says = (text: RegExp) =>
    expect(page.getByRole('alert').filter({ hasText: text }).first()).toBeVisible()

  await test.step('before the heater is on, and before it is warm', async () => {
    await set(page, { volts: 100 })
    await says(/heater is off/i)
    await page.getByRole('button', { name: 'Heater on' }).click()
    await expect(page.getByRole('button', { name: 'Heater off' })).toBeVisible()
    await set(page, { volts: 100 })
    await says(/warming up: wait \d+ s more/i)
    await expect(anodeField(page)).toHaveValue('100')
  })
  await warmUp(page)

  await test.step('above the limit, below zero, and not a number', async () => {
    await set(page, { volts: 310 })
    await says(/310\.?0? V is 10\.?0? V above this bench's limit of 300\.?0? V/)
    await set(page, { volts: -5 })
    await says(/below zero/)
    await set(page, { volts: 'abc' })
    await says(/number/i)
    await set(page, { amps: '2,4' })
    await says(/above this bench's limit of 2/)
    await expect(coilField(page)).toHaveValue('2,4')
    await expectAccessible(page)
  })

  await test.step('with the enclosure open, and with the emergency stop pressed', async () => {
    await askSimulator(site.simulatorTest, 'enclosure', benchId, { open: true })
    await expect(page.getByText(/Anode not permitted\. The enclosure is open: close it/)).toBeVisible()
    await set(page, { volts: 100 })
    await says(/enclosure is open: close it/i)
    await askSimulator(site.simulatorTest, 'enclosure', benchId, { open: false })
    await expect(page.getByText(/Anode permitted\. Every contact is closed/)).toBeVisible()
    await page.keyboard.press('Escape')
    await expect(page.getByRole('button', { name: 'Heater on' })).toBeVisible()
    await askSimulator(site.simulatorTest, 'e-stop', benchId, { in: true })
    await expect(page.getByText(/emergency stop is pressed/i).first()).toBeVisible()
    await page.getByRole('button', { name: 'Heater on' }).click()
    await says(/emergency stop is pressed/i)
    await askSimulator(site.simulatorTest, 'e-stop', benchId, { in: false })
  })
})

test('What is not yours is not found, and a page of another role says why', async ({ signInAs }) => {
  const student = await signInAs('student')
  await student.goto('/benches/bench-9')
  await expect(student.getByRole('heading', { name: 'Not found' })).toBeVisible()
  await expectAccessible(student)
  const answer = await student.request.post('/make-safe', {
    headers: { Origin: new URL(student.url()).origin },
  })
  expect(answer.status()).toBe(403)
})

test.describe('without a session', () => {
  test('a page leads to the sign-in page and back', async ({ page, site }) => {
    await page.goto(`${site.url}/benches/bench-1`)
    await expect(page).toHaveURL(/\/sign-in\?returnTo=%2Fbenches%2Fbench-1/)
    await page.getByRole('button', { name: 'Sign in' }).click()
    await expect(page.getByText('Type the e-mail address of your account.')).toBeVisible()
  })

  test('a session that has ended is told on the open page', async ({ signInAs }) => {
    const page = await signInAs('instructor', { path: '/benches/bench-1' })
    await expect(page.getByRole('region', { name: 'Energy path' })).toBeVisible()
    const other = await page.context().newPage()
    await other.goto('/account')
    await other.getByRole('button', { name: 'Sign out' }).click()
    await other.waitForURL('**/sign-in')
    await expect(page.getByText(/session has ended|signed out/i).first()).toBeVisible({ timeout: 20_000 })
  })
})
