import { eq } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import type { Person } from '#app/context.ts'
import { people, sessions } from '#app/db/schema.ts'
import { formRequest, ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'
import { type MailCatcher, startMailCatcher } from '#tests/support/mail-catcher.ts'

let mail: MailCatcher
beforeAll(async () => {
  mail = await startMailCatcher()
  vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
  vi.stubEnv('SMTP_URL', `smtp://127.0.0.1:${mail.port}`)
})
afterAll(() => mail.close())

async function site() {
  const { siteDatabase } = await import('#app/db/site.server.ts')
  const db = await siteDatabase()
  const { seedDemo } = await import('#app/db/seed.server.ts')
  await seedDemo(db)
  const { getPerson } = await import('#app/auth/sessions.server.ts')
  const { action } = await import('#app/routes/account/sign-in.tsx')

  const signIn = async (email: string, password: string, path = '/sign-in', headers = {}) => {
    const request = formRequest(path, { email, password }, headers)
    const result = await action(routeArgs(request, routeContext(db), {}))
    if (!(result instanceof Response)) return { result, cookie: '' }
    return { result, cookie: result.headers.get('Set-Cookie')?.split(';')[0] ?? '' }
  }
  const personOf = (cookie: string) =>
    getPerson(db, new Request('http://127.0.0.1:3000/hall', { headers: { Cookie: cookie } }))
  return { db, signIn, personOf }
}

const statusOf = (result: unknown) =>
  result instanceof Response ? result.status : (result as { init: { status: number } }).init.status

const errorsOf = (result: unknown) => (result as { data: { errors: Record<string, string[]> } }).data.errors

describe('Signing in', () => {
  it('starts a session that is a row and names the person', async () => {
    const { db, signIn, personOf } = await site()
    const { result, cookie } = await signIn(
      'Student@Lab.test',
      'two-coils-one-beam',
      '/sign-in?returnTo=/benches/bench-1',
    )
    expect(result).toBeInstanceOf(Response)
    expect((result as Response).headers.get('Location')).toBe('/benches/bench-1')
    expect((result as Response).headers.get('Set-Cookie')).toMatch(/HttpOnly.*SameSite=Lax/i)
    const person = await personOf(cookie)
    expect(person).toMatchObject({ name: 'Kofi Adeyemi', role: 'student' })
    expect(
      await db.query.sessions.findFirst({ where: eq(sessions.id, person?.sessionId ?? '') }),
    ).toBeTruthy()
  })

  it('stores passwords as argon2id with at least 19 MiB and two passes (OWASP Password Storage Cheat Sheet)', async () => {
    const { db } = await site()
    for (const { passwordHash } of await db.query.people.findMany()) {
      const [, memory, passes] = /^\$argon2id\$v=19\$m=(\d+),t=(\d+),p=\d+\$/.exec(passwordHash) ?? []
      expect(Number(memory)).toBeGreaterThanOrEqual(19 * 1024)
      expect(Number(passes)).toBeGreaterThanOrEqual(2)
    }
  })

  it('goes on only to a path of this site', async () => {
    const { signIn } = await site()
    for (const returnTo of ['https://elsewhere.test/', '//elsewhere.test', '/\\elsewhere.test']) {
      const { result } = await signIn(
        'student@lab.test',
        'two-coils-one-beam',
        `/sign-in?${new URLSearchParams({ returnTo })}`,
      )
      expect((result as Response).headers.get('Location')).toBe('/')
    }
  })

  it('answers an unknown account and a wrong password alike', async () => {
    const { signIn } = await site()
    const unknown = await signIn('nobody@lab.test', 'two-coils-one-beam')
    const wrong = await signIn('instructor@lab.test', 'wrong')
    expect(statusOf(unknown.result)).toBe(400)
    expect(errorsOf(unknown.result)).toEqual(errorsOf(wrong.result))
  })

  it('marks each empty field', async () => {
    const { signIn } = await site()
    const { result } = await signIn('', '')
    expect(errorsOf(result)).toEqual({
      email: ['Type the e-mail address of your account.'],
      password: ['Type your password.'],
    })
  })

  it('is throttled per account: after five wrong passwords the right one waits too, and others do not', async () => {
    const { signIn } = await site()
    for (let attempt = 0; attempt < 5; attempt++)
      expect(statusOf((await signIn('partner@lab.test', `wrong-${attempt}`)).result)).toBe(400)
    const { result } = await signIn('partner@lab.test', 'read-both-edges')
    expect(statusOf(result)).toBe(429)
    expect(errorsOf(result).password?.[0]).toMatch(/Wait \d+ minutes?/)
    expect(statusOf((await signIn('technician@lab.test', 'prove-it-dead-first')).result)).toBe(302)
  })

  it('is throttled however the address is written, and for attempts side by side', async () => {
    const { signIn } = await site()
    const spellings = [' nobody2@lab.test', 'NOBODY2@lab.test ', 'Nobody2@Lab.Test', 'nobody2@lab.test\t']
    const results = await Promise.all(
      [...spellings, ...spellings].map((email, index) => signIn(email, `wrong-${index}`)),
    )
    const statuses = results.map(({ result }) => statusOf(result)).sort()
    expect(statuses).toEqual([400, 400, 400, 400, 400, 429, 429, 429])
  })

  it('goes on from a browser that has signed in before, whoever tries passwords elsewhere', async () => {
    const { signIn } = await site()
    const first = await signIn('instructor@lab.test', 'lights-off-please')
    const known = (first.result as Response).headers
      .getSetCookie()
      .find((cookie) => cookie.startsWith('coilside_known'))
    expect(known).toMatch(/HttpOnly.*SameSite=Lax/i)
    const here = { Cookie: known?.split(';')[0] ?? '' }
    for (let attempt = 0; attempt < 6; attempt++) await signIn('instructor@lab.test', `wrong-${attempt}`)
    const elsewhere = await signIn('instructor@lab.test', 'lights-off-please')
    expect(statusOf(elsewhere.result)).toBe(429)
    expect(
      statusOf((await signIn('instructor@lab.test', 'lights-off-please', '/sign-in', here)).result),
    ).toBe(302)
    // It is known for this account alone, and its own attempts count too.
    for (let attempt = 0; attempt < 5; attempt++)
      await signIn('instructor@lab.test', `wrong-${attempt}`, '/sign-in', here)
    expect(
      statusOf((await signIn('instructor@lab.test', 'lights-off-please', '/sign-in', here)).result),
    ).toBe(429)
  })

  it('refuses an address or a password of a length that none has', async () => {
    const { signIn } = await site()
    const { result } = await signIn(`${'x'.repeat(250)}@lab.test`, 'y'.repeat(1001))
    expect(Object.keys(errorsOf(result))).toEqual(['email', 'password'])
  })
})

describe('A session', () => {
  it('ends at sign-out, also for a copy of its cookie', async () => {
    const { db, signIn, personOf } = await site()
    const { cookie } = await signIn('student@lab.test', 'two-coils-one-beam')
    const { action } = await import('#app/routes/account/sign-out.ts')
    const request = formRequest('/sign-out', {}, { Cookie: cookie })
    expect(statusOf(await action(routeArgs(request, routeContext(db), {})))).toBe(302)
    expect(await personOf(cookie)).toBeNull()
  })

  it('is refused with a changed id', async () => {
    const { signIn, personOf } = await site()
    const { cookie } = await signIn('student@lab.test', 'two-coils-one-beam')
    const [name, value = ''] = cookie.split('=')
    expect(await personOf(`${name}=${value.startsWith('A') ? 'B' : 'A'}${value.slice(1)}`)).toBeNull()
  })

  it('is none for a disabled account', async () => {
    const { db, signIn, personOf } = await site()
    const { cookie } = await signIn('student@lab.test', 'two-coils-one-beam')
    expect(await personOf(cookie)).toBeTruthy()
    await db.update(people).set({ disabledAt: new Date() }).where(eq(people.email, 'student@lab.test'))
    expect(await personOf(cookie)).toBeNull()
    await db.update(people).set({ disabledAt: null }).where(eq(people.email, 'student@lab.test'))
  })
})

describe('A change of password', () => {
  it('needs the present one, ends the other sessions, and is told by e-mail', async () => {
    const { db, signIn, personOf } = await site()
    const here = await signIn('technician@lab.test', 'prove-it-dead-first')
    const elsewhere = await signIn('technician@lab.test', 'prove-it-dead-first')
    const person = (await personOf(here.cookie)) as Person
    const { action } = await import('#app/routes/account/account.tsx')
    const change = (current: string, next: string, again = next) =>
      action(routeArgs(formRequest('/account', { current, next, again }), routeContext(db, person), {}))

    expect(statusOf(await change('not-the-one', 'a-new-long-password'))).toBe(400)
    expect(statusOf(await change('prove-it-dead-first', 'short'))).toBe(400)
    expect(
      statusOf(await change('prove-it-dead-first', 'a-new-long-password', 'another-long-password')),
    ).toBe(400)
    expect(mail.messages).toHaveLength(0)

    expect(await change('prove-it-dead-first', 'a-new-long-password')).toMatchObject({ changed: true })
    expect(await personOf(here.cookie)).toBeTruthy()
    expect(await personOf(elsewhere.cookie)).toBeNull()
    expect(mail.messages[0]?.subject).toBe('Your Coilside password was changed')
    expect(statusOf((await signIn('technician@lab.test', 'prove-it-dead-first')).result)).toBe(400)
    expect(statusOf((await signIn('technician@lab.test', 'a-new-long-password')).result)).toBe(302)
  })
})

describe('The present password', () => {
  it('may be tried five times only, and then the right one waits too', async () => {
    const { db, signIn, personOf } = await site()
    const { cookie } = await signIn('student@lab.test', 'two-coils-one-beam')
    const person = (await personOf(cookie)) as Person
    const { action } = await import('#app/routes/account/account.tsx')
    const change = async (current: string) => {
      const fields = { current, next: 'a-new-long-password', again: 'a-new-long-password' }
      const result = await action(routeArgs(formRequest('/account', fields), routeContext(db, person), {}))
      return JSON.stringify(result)
    }
    for (let attempt = 0; attempt < 5; attempt++)
      expect(await change(`wrong-${attempt}`)).toContain('This is not your present password.')
    expect(await change('two-coils-one-beam')).toContain('Too many attempts')
    expect(statusOf((await signIn('student@lab.test', 'two-coils-one-beam')).result)).toBe(302)
  })
})

describe('The room light', () => {
  it('follows the account and stands in a cookie for those not signed in', async () => {
    const { db, signIn, personOf } = await site()
    const { cookie } = await signIn('student@lab.test', 'two-coils-one-beam')
    const { action } = await import('#app/routes/account/room-light.ts')
    const request = formRequest('/room-light', { roomLight: 'dark', returnTo: '/hall' }, { Cookie: cookie })
    const response = (await action(routeArgs(request, routeContext(db), {}))) as Response
    expect(response.headers.get('Location')).toBe('/hall')
    expect((await personOf(cookie))?.roomLight).toBe('dark')

    const { readRoomLight } = await import('#app/auth/room-light.server.ts')
    const lightCookie = response.headers.get('Set-Cookie')?.split(';')[0] ?? ''
    expect(
      await readRoomLight(new Request('http://127.0.0.1:3000/', { headers: { Cookie: lightCookie } })),
    ).toBe('dark')
    expect(await readRoomLight(new Request('http://127.0.0.1:3000/'))).toBe('lit')
  })

  it('leaves the page where it is when the web application does not answer or fails', async () => {
    const { clientAction } = await import('#app/routes/account/room-light.ts')
    const failures = [new TypeError('Failed to fetch'), new Error('Unexpected Server Error')]
    for (const failure of failures) {
      const serverAction = () => Promise.reject(failure)
      expect(await clientAction({ serverAction } as never)).toMatchObject({
        data: { ok: false, refusals: [{ code: 'app-silent' }] },
        init: { status: 503 },
      })
    }
  })

  it('refuses any other word', async () => {
    const { db } = await site()
    const { action } = await import('#app/routes/account/room-light.ts')
    const request = formRequest('/room-light', { roomLight: 'dim' })
    await expect(action(routeArgs(request, routeContext(db), {}))).rejects.toMatchObject({
      init: { status: 400 },
    })
  })
})
