import { acknowledgeCautions, anodeField, expectTerminal, set, takeControls, warmUp } from './bench-steps.ts'
import { expect, expectAccessible, test } from './fixtures.ts'

test('Two students read the same beam, a reading is struck with a reason, and the instructor takes over', async ({
  site,
  signInAs,
}) => {
  test.setTimeout(180_000)
  const benchId = 'bench-3'
  const student = await signInAs('student')
  await acknowledgeCautions(student, benchId)
  await takeControls(student)
  await warmUp(student)
  await set(student, { volts: 150, amps: 1.4 })
  await expect(student.getByText('Both channels are settled')).toBeVisible({ timeout: 40_000 })
  await student.keyboard.press('Control+Enter')
  await student.getByLabel('Reading 1, left edge in cm').fill('10,9')
  await student.getByLabel('Reading 1, right edge in cm').fill('2.9')
  await student.getByLabel('Reading 1, right edge in cm').press('Enter')

  await test.step('a right edge left of the left one is refused beside the field, and nothing typed is lost', async () => {
    await expect(student.getByRole('alert').filter({ hasText: /right/i }).first()).toBeVisible()
    await expect(student.getByLabel('Reading 1, left edge in cm')).toHaveValue('10,9')
    await student.getByLabel('Reading 1, left edge in cm').fill('2,05')
    await student.getByLabel('Reading 1, right edge in cm').fill('10,00')
    await student.getByRole('button', { name: 'Enter edges' }).click()
    await expect(student.getByRole('row', { name: /^1 / })).toContainText(/\d\.\d{2,3}\(\d+\)/)
  })

  const partner = await signInAs('student', { email: 'partner@lab.test', path: `/benches/${benchId}` })
  await test.step('the partner enters edges of their own for the same reading, without the controls', async () => {
    await expect(anodeField(partner)).toHaveCount(0)
    await partner.getByLabel('Reading 1, left edge in cm').fill('2.08')
    await partner.getByLabel('Reading 1, right edge in cm').fill('9.97')
    await partner.getByRole('button', { name: 'Enter edges' }).click()
    await expect(partner.getByText(/Kofi Adeyemi: 2\.05 to 10\.00/)).toBeVisible()
    await expectAccessible(partner)
  })

  await test.step('the partner cannot take the controls before the cautions are acknowledged', async () => {
    await student.getByRole('button', { name: 'Release the controls' }).click()
    await expect(student.getByText('at the controls: nobody')).toBeVisible()
    await partner.getByRole('button', { name: 'Take the controls' }).click()
    await expect(partner.getByText(/has not acknowledged the cautions/).first()).toBeVisible()
    await takeControls(student)
  })

  await test.step('a reading is struck with a reason and stays to be seen', async () => {
    await student
      .getByRole('button', { name: /strike/ })
      .first()
      .click()
    await student.getByRole('button', { name: 'Strike it' }).click()
    await expect(
      student
        .getByRole('dialog')
        .getByRole('alert')
        .filter({ hasText: /why this reading is struck/i }),
    ).toBeVisible()
    await student.getByLabel('Reason').fill('left edge read off the inner side')
    await student.getByRole('button', { name: 'Strike it' }).click()
    await expect(student.getByText(/struck by Kofi Adeyemi: left edge read off the inner side/)).toBeVisible()
    await expectAccessible(student)
  })

  await test.step('the instructor takes over, and the student is told and cannot set any longer', async () => {
    await warmUp(student)
    await set(student, { volts: 150 })
    await expectTerminal(site, benchId, 'live')
    const instructor = await signInAs('instructor', { path: `/benches/${benchId}` })
    await instructor.getByRole('button', { name: 'Take over' }).click()
    await instructor.getByRole('button', { name: 'Take over the controls' }).click()
    await expect(instructor.getByText('(you)')).toBeVisible()
    await expect(student.getByText(/Mina Oyelaran/).first()).toBeVisible()
    await expect(anodeField(student)).toHaveCount(0)
    await expectTerminal(site, benchId, 'live')

    await instructor.keyboard.press('Escape')
    await expectTerminal(site, benchId, 'down')
    await expect(student.getByText(/off commanded/i).first()).toBeVisible()
  })
})

test('The technician makes the room safe by holding the button; a tap does nothing, and a student has no such button', async ({
  site,
  signInAs,
}) => {
  const benchId = 'bench-2'
  const technician = await signInAs('technician')
  await acknowledgeCautions(technician, benchId)
  await takeControls(technician)
  await warmUp(technician)
  await set(technician, { volts: 120, amps: 1 })
  await expectTerminal(site, benchId, 'live')

  const hall = await technician.context().newPage()
  await hall.goto('/hall')
  const room = hall.getByRole('button', { name: /Make room safe/ })
  await room.click()
  await hall.keyboard.press('Escape')
  await hall.waitForTimeout(1_500)
  await expectTerminal(site, benchId, 'live')

  await room.click({ delay: 1_300 })
  await expectTerminal(site, benchId, 'down')
  await expect(hall.getByText(/off/i).first()).toBeVisible()

  await test.step('by keyboard it is pressed twice', async () => {
    await warmUp(technician)
    await set(technician, { volts: 120 })
    await expectTerminal(site, benchId, 'live')
    await room.focus()
    await hall.keyboard.press('Enter')
    await expect(hall.getByRole('button', { name: 'Press again' })).toBeVisible()
    await hall.keyboard.press('Enter')
    await expectTerminal(site, benchId, 'down')
  })

  const student = await signInAs('student')
  await expect(student.getByRole('article')).toHaveCount(4)
  await expect(student.getByRole('button', { name: /Make room safe/ })).toHaveCount(0)
  await expect(student.getByRole('button', { name: 'Make Bench 1 safe' })).toBeVisible()
})
