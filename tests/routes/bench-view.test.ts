import { eq } from 'drizzle-orm'
import { beforeAll, beforeEach, describe, expect, it, vi } from 'vitest'
import { acknowledgeCautions, hasAcknowledged } from '#app/benches/acknowledgements.server.ts'
import { findBenchLog } from '#app/benches/bench-log.server.ts'
import { loadBenchView } from '#app/benches/bench-view.server.ts'
import { cautions, cautionsVersion, termOf } from '#app/benches/cautions.ts'
import { listVisibleBenches } from '#app/benches/visible-benches.server.ts'
import { storeBatch } from '#app/bridge-link/spool.server.ts'
import type { Person } from '#app/context.ts'
import { demoBenches } from '#app/db/demo-benches.ts'
import { acknowledgements, benchCommands, benchRevisions, people } from '#app/db/schema.ts'
import type { BenchEvent } from '#app/protocol/messages.ts'
import { loader as health } from '#app/routes/api/health.ts'
import { loader as log } from '#app/routes/benches/log.tsx'
import { type ClassSite, openClassSite } from '#tests/support/class-site.ts'
import { ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'
import { freePort } from '#tests/support/processes.ts'

/** Of a bridge that still holds all. */
const oldest = { event: 1, summary: 1 }

let site: ClassSite
beforeAll(async () => {
  vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
  vi.stubEnv('BRIDGE_URL', `http://127.0.0.1:${await freePort()}`)
  site = await openClassSite()
})

const view = (person: Person, benchId = 'bench-1') => loadBenchView(site.db, { benchId, person })

describe('The view of a bench', () => {
  it('has the newest revision, who watches, and what this person may', async () => {
    const seen = await view(site.student)
    expect(seen.bench).toEqual({
      id: 'bench-1',
      name: 'Bench 1',
      place: 'door side',
      config: demoBenches[0],
    })
    expect(seen.may).toEqual({ takeControls: true, takeOver: false, makeSafe: true, reset: true })
    expect((await view(site.technician)).may.takeOver).toBe(true)
    expect(seen.people.map(({ name, role }) => `${name}, ${role}`)).toEqual([
      'Mina Oyelaran, instructor',
      'Pat Vance, technician',
      'Runa Lindqvist, student',
    ])
    expect({ run: seen.run, readings: seen.readings }).toEqual({ run: null, readings: [] })
  })

  it('never holds the accepted value of e/m', async () => {
    for (const person of [site.student, site.technician])
      expect(JSON.stringify(await view(person))).not.toMatch(/1\.?7588/)
  })

  it('leaves out whoever has no account in force', async () => {
    await site.db.update(people).set({ disabledAt: new Date() }).where(eq(people.id, site.partner.id))
    const names = (await view(site.student)).people.map(({ name }) => name)
    await site.db.update(people).set({ disabledAt: null }).where(eq(people.id, site.partner.id))
    expect(names).not.toContain('Runa Lindqvist')
  })

  it('is a 404 for a student of another class and for an unknown bench', async () => {
    await expect(view(site.outsider)).rejects.toMatchObject({ init: { status: 404 } })
    await expect(view(site.technician, 'bench-9')).rejects.toMatchObject({ init: { status: 404 } })
    expect(await listVisibleBenches(site.db, site.outsider)).toEqual([])
    expect(await listVisibleBenches(site.db, { id: site.student.id, role: 'student' })).toHaveLength(4)
  })

  it('follows a new revision', async () => {
    const [bench] = demoBenches
    if (!bench) throw new Error('There is no bench')
    const config = { ...bench, revision: 2, sampleHertz: 20 }
    await site.db.insert(benchRevisions).values({ benchId: 'bench-1', revision: 2, config })
    const seen = (await view(site.student)).bench.config
    await site.db.delete(benchRevisions).where(eq(benchRevisions.revision, 2))
    expect(seen).toMatchObject({ revision: 2, sampleHertz: 20 })
  })
})

describe('The cautions', () => {
  it.each([
    ['2026-01-01', '2026-spring'],
    ['2026-07-31', '2026-spring'],
    ['2026-08-01', '2026-autumn'],
    ['2026-12-31', '2026-autumn'],
  ])('of %s belong to the term %s', (day, term) => {
    expect(termOf(new Date(`${day}T12:00:00`))).toBe(term)
  })

  it('are acknowledged once a term and a wording, by each person', async () => {
    const { id } = site.student
    const autumn = new Date('2026-10-05T09:00:00')
    await acknowledgeCautions(site.db, { personId: id, now: autumn })
    await acknowledgeCautions(site.db, { personId: id, now: new Date('2026-11-05T09:00:00') })
    const rows = await site.db.select().from(acknowledgements).where(eq(acknowledgements.personId, id))
    expect(rows).toEqual([{ personId: id, term: '2026-autumn', cautionsVersion, acknowledgedAt: autumn }])
    expect(await hasAcknowledged(site.db, id, autumn)).toBe(true)
    expect(await hasAcknowledged(site.db, id, new Date('2027-02-01T09:00:00'))).toBe(false)
    expect(await hasAcknowledged(site.db, site.partner.id, autumn)).toBe(false)
    await site.db.update(acknowledgements).set({ cautionsVersion: cautionsVersion - 1 })
    expect(await hasAcknowledged(site.db, id, autumn)).toBe(false)
  })

  it('name every hazard that the product has to show', () => {
    const text = cautions.map((caution) => `${caution.title} ${caution.text}`).join(' ')
    for (const word of [
      'voltage',
      'heater',
      'dead with a meter',
      'Hot coils',
      'implode',
      'eye protection',
      'dark room',
    ])
      expect(text).toContain(word)
    for (const word of [/emergency stop/, /implanted medical devices/, /[Nn]obody works alone/, /standby/])
      expect(text).toMatch(word)
  })
})

describe('The log of a bench', () => {
  const second = (at: number) => 1_780_000_000 + at
  const event = (sequence: number, over: Partial<BenchEvent> = {}): BenchEvent => ({
    sequence,
    benchId: 'bench-1',
    at: second(sequence),
    kind: 'command',
    personId: null,
    personName: null,
    sentence: `Event ${sequence}.`,
    data: {},
    ...over,
  })
  const by = ({ id, name }: Person) => ({ personId: id, personName: name })

  beforeEach(async () => {
    await site.db.delete(benchCommands)
    await storeBatch(site.db, {
      oldest,
      bridgeId: 'room-1',
      events: [
        event(1, { ...by(site.student), sentence: 'Kofi set the anode.' }),
        event(2, { ...by(site.partner), sentence: 'Runa set the anode.' }),
        event(3, { ...by(site.partner), kind: 'controls', sentence: 'Runa took the controls.' }),
        event(4, { kind: 'trip', sentence: 'Enclosure opened.' }),
        event(5, { benchId: 'bench-2', kind: 'trip', sentence: 'Another bench tripped.' }),
        event(6, { benchId: null, kind: 'start', sentence: 'The bridge started.' }),
        event(7, { ...by(site.technician), sentence: 'Pat set the anode.' }),
      ],
      summaries: [],
    })
  })

  const sentences = async (reader: Person) =>
    (await findBenchLog(site.db, { benchId: 'bench-1', reader, limit: 50 })).map(({ sentence }) => sentence)

  it('is the newest first, of this bench and its room, and whole for a technician', async () => {
    expect(await sentences(site.technician)).toEqual([
      'Pat set the anode.',
      'The bridge started.',
      'Enclosure opened.',
      'Runa took the controls.',
      'Runa set the anode.',
      'Kofi set the anode.',
    ])
  })

  it('shows a student what the bench did and who had the controls, but others’ commands not', async () => {
    expect(await sentences(site.student)).toEqual([
      'The bridge started.',
      'Enclosure opened.',
      'Runa took the controls.',
      'Kofi set the anode.',
    ])
  })

  it('shows an instructor the commands of their classes’ members', async () => {
    const read = await sentences(site.instructor)
    expect(read).toContain('Runa set the anode.')
    expect(read).not.toContain('Pat set the anode.')
  })

  it('holds what was asked here, with what became of it', async () => {
    await site.db.insert(benchCommands).values([
      {
        benchId: 'bench-1',
        personId: site.student.id,
        askedAt: new Date(second(8) * 1000),
        kind: 'set-anode',
        asked: { volts: 340 },
        outcome: 'refused',
        answer: 'The limit is 300 V.',
      },
      {
        benchId: 'bench-1',
        personId: site.student.id,
        askedAt: new Date(second(9) * 1000),
        kind: 'set-coils',
        asked: { amps: 1.5 },
        outcome: 'unanswered',
        answer: 'The bridge did not answer.',
      },
    ])
    const [newest, before] = await findBenchLog(site.db, {
      benchId: 'bench-1',
      reader: site.student,
      limit: 2,
    })
    expect(before).toMatchObject({
      source: 'asked',
      sentence: 'Anode to 340 V: The limit is 300 V.',
      outcome: 'refused',
      personName: 'Kofi Adeyemi',
    })
    expect(newest).toMatchObject({
      sentence: 'Coils to 1.5 A: The bridge did not answer.',
      outcome: 'unanswered',
    })
    expect(await sentences(site.partner)).not.toContain('Anode to 340 V: The limit is 300 V.')
    // The bench's own page has what the bridge told, and what nobody answered.
    expect((await view(site.student)).log.slice(0, 2).map(({ sentence }) => sentence)).toEqual([
      'Coils to 1.5 A: The bridge did not answer.',
      'The bridge started.',
    ])
  })

  it('is paged without a gap or a repeat, and any other page number is the first', async () => {
    const events = Array.from({ length: 120 }, (_, index) =>
      event(index + 1, { at: second(100), kind: 'warning' }),
    )
    await storeBatch(site.db, { bridgeId: 'room-2', oldest, events, summaries: [] })
    const page = async (number: string) => {
      const request = new Request(`http://127.0.0.1:3000/benches/bench-1/log?page=${number}`)
      return log(routeArgs(request, routeContext(site.db, site.technician), { benchId: 'bench-1' }))
    }
    const pages = [await page('1'), await page('2'), await page('3')]
    expect(pages.map(({ hasOlder }) => hasOlder)).toEqual([true, true, false])
    const ids = pages.flatMap(({ entries }) => entries.map(({ id }) => id))
    expect(new Set(ids).size).toBe(126)
    expect(ids).toHaveLength(126)
    for (const odd of ['0', '-1', 'x', '1.5']) expect((await page(odd)).page).toBe(1)
  })
})

describe('The health of the site', () => {
  it('is good without a bridge, which is named, and bad without a database', async () => {
    const ask = async (db = site.db) => {
      const response = await health(
        routeArgs(new Request('http://127.0.0.1:3000/api/health'), routeContext(db), {}),
      )
      return { status: response.status, body: await response.json() }
    }
    expect(await ask()).toEqual({ status: 200, body: { database: 'answers', bridge: 'does not answer' } })
    const { openDatabase } = await import('#app/db/client.server.ts')
    const closed = await openDatabase(ownDatabaseUrl())
    closed.$client.close()
    expect(await ask(closed)).toEqual({
      status: 500,
      body: { database: 'does not answer', bridge: 'does not answer' },
    })
  })
})
