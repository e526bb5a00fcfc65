import { classCsv, classReadings } from '#tests/support/send-import.ts'
import { expectEveryLook } from './every-look.ts'
import { expect, expectAccessible, test } from './fixtures.ts'

const csv = (text: string, name = 'measurements.csv') => ({
  name,
  mimeType: 'text/csv',
  buffer: Buffer.from(text),
})

test('A student imports a class’s readings: a bad row is shown, a column is mapped, nothing is stored before it is confirmed', async ({
  signInAs,
}) => {
  test.setTimeout(180_000)
  const page = await signInAs('student')
  await page.getByRole('link', { name: 'Runs' }).click()
  await expect(page.getByText('You have taken no reading yet.').or(page.getByRole('table'))).toBeVisible()
  await page.getByRole('link', { name: 'Import readings' }).click()
  const file = page.getByLabel('CSV file with readings')
  const importing = page.getByRole('button', { name: /^Import \d+ reading/ })

  await test.step('what is no text is refused beside the field', async () => {
    await page.getByRole('button', { name: 'Look at the file' }).click()
    await expect(page.getByRole('alert').filter({ hasText: 'Choose a CSV file' })).toBeVisible()
    await file.setInputFiles({ ...csv(''), buffer: Buffer.from([0x89, 0x50, 0x4e, 0x47, 0, 1, 2]) })
    await page.getByRole('button', { name: 'Look at the file' }).click()
    await expect(page.getByRole('alert').filter({ hasText: 'not a text file' })).toBeVisible()
    await file.setInputFiles(csv('1,2\n'.repeat(100_000)))
    await page.getByRole('button', { name: 'Look at the file' }).click()
    await expect(page.getByRole('alert').filter({ hasText: '400 thousand bytes' })).toBeVisible()
    await expectAccessible(page)
  })

  await test.step('the file is shown as it would be read, with its bad rows', async () => {
    // The length comes without a unit, and two rows were spoilt on the way.
    const spoilt = classCsv.replace('d (cm)', 'd').concat('\n=1+1,1.3,12.8\n195,1.3,-12.8\n')
    await file.setInputFiles(csv(spoilt))
    await page.getByRole('button', { name: 'Look at the file' }).click()
    await expect(page.getByRole('heading', { name: 'What the columns hold' })).toBeVisible()
    await expect(page.getByLabel('What V (V) holds')).toHaveValue('voltage')
    await expect(page.getByLabel('Unit of I (A)')).toHaveValue('A')
    await expect(page.getByText('diameter: has no unit: choose it').first()).toBeVisible()
    await expect(importing).toBeDisabled()
  })

  await test.step('the unit is chosen, the field factor stated, and what would be stored follows', async () => {
    await page.getByLabel('Unit of d').selectOption('cm')
    await expect(page.getByText('2 rows cannot be used')).toBeVisible()
    await expect(page.getByText('anode voltage: “=1+1” is not a number')).toBeVisible()
    await expect(page.getByText('diameter: “-12.8” has to be above 0')).toBeVisible()
    await expect(page.getByText('Choose the bench whose data these readings use')).toBeVisible()
    await page.getByRole('radio', { name: 'none of these: a field factor of its own' }).check()
    await expect(page.getByText('Type the field factor in teslas an ampere.')).toBeVisible()
    const { field_factor_T_per_A: factor } = classReadings.expected
    await page.getByLabel('Field factor, T/A').fill(String(factor))
    await page.getByLabel('its standard uncertainty, T/A').fill('7e-6')
    await page.getByLabel('of the voltage, V').fill(String(classReadings.uVolts))
    await page.getByLabel('of the current, A').fill(String(classReadings.uAmps))
    await page.getByLabel('of the diameter, cm').fill(String(classReadings.uDiameterCm))
    await page.getByLabel('of the diameter, cm').press('Tab')
    const first = page.getByRole('table', { name: 'Rows as they would be stored' }).getByRole('row').nth(1)
    await expect(first).toContainText('150.0(10)')
    await expect(first).toContainText('8.10(20)')
    await expect(importing).toBeEnabled()
    await expectEveryLook(page, 'import')
  })

  await test.step('confirmed, it is a run of its own with e/m of each reading', async () => {
    await importing.click()
    await expect(page.getByRole('heading', { name: 'Readings imported from measurements.csv' })).toBeVisible()
    await expect(page.getByRole('row')).toHaveCount(1 + classReadings.voltsV.length)
    // 2V/(kIr)² of 150 V, 1.54 A and 8.1 cm; of it 0.4/8.1, 1/150, 0.02/1.54 and 14/739.8 in quadrature.
    await expect(page.getByRole('row', { name: /^1 / }).getByRole('cell').nth(3)).toHaveText('1.409(77)')
    await expect(page.getByText('imported', { exact: true })).toHaveCount(classReadings.voltsV.length)
    await expectEveryLook(page, 'imported')
  })

  await test.step('a reading of it is struck with a reason', async () => {
    await page.getByRole('button', { name: 'strike reading 24' }).click()
    await page.getByLabel('Reason').fill('the beam met the glass')
    await page.getByRole('button', { name: 'Strike it' }).click()
    await expect(page.getByText('struck by Kofi Adeyemi: the beam met the glass')).toBeVisible()
  })

  await test.step('it stands in the list of runs, with its analysis', async () => {
    await page.getByRole('link', { name: 'Runs' }).click()
    const run = page.getByRole('row').filter({ hasText: 'measurements.csv' })
    await expect(run).toContainText('24 readings, e/m of each, 1 struck')
    await expectEveryLook(page, 'runs')
    await run.getByRole('link', { name: 'analysis' }).click()
    await expect(page.getByRole('heading', { name: 'Analysis of a run' })).toBeVisible()
    await expect(page.getByText('imported for a field of its own')).toBeVisible()
    await expectAccessible(page)
  })
})
