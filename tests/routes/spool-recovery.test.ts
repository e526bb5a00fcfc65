import { copyFileSync, mkdtempSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { asc, eq, gt } from 'drizzle-orm'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { storeBatch } from '#app/bridge-link/spool.server.ts'
import { type Database, openDatabase } from '#app/db/client.server.ts'
import { benchEvents, channelSummaries, spoolMarks } from '#app/db/schema.ts'
import { openSpool, type Spool } from '#bridge/spool.ts'
import { ownDatabaseUrl } from '#tests/support/database.ts'

const bridgeId = 'room-1'
const limits = { events: 20, summaries: 30 }

let db: Database
let directory: string
let spool: Spool
let happened: string[]

const openSpoolFile = (name: string) => openSpool(`file:${join(directory, name)}`)

beforeEach(async () => {
  directory = mkdtempSync(join(tmpdir(), 'coilside-spool-'))
  db = await openDatabase(ownDatabaseUrl())
  spool = await openSpoolFile('spool.db')
  happened = []
})
afterEach(async () => {
  await spool.close()
  db.$client.close()
})

/** So many events, each with a sentence of its own, and twice as many summaries. */
async function happen(count: number) {
  for (let i = 0; i < count; i++) {
    const number = happened.length + 1
    const at = 1_780_000_000 + number
    happened.push(`It happened ${number}.`)
    await spool.addEvents([
      {
        benchId: 'bench-1',
        at,
        kind: 'phase',
        personId: null,
        personName: null,
        sentence: `It happened ${number}.`,
        data: {},
      },
    ])
    const figures = { benchId: 'bench-1', second: at, min: number, mean: number, max: number, count: 10 }
    await spool.addSummaries([
      { ...figures, channel: 'anodeVolts' },
      { ...figures, channel: 'coilAmps' },
    ])
  }
}

/** As the bridge's link does it, until the spool is empty. Answers with the number of batches. */
async function sendAll(): Promise<number> {
  for (let batches = 0; batches < 50; batches++) {
    const batch = await spool.batch(limits)
    if (batch.events.length === 0 && batch.summaries.length === 0) return batches
    await spool.settle(await storeBatch(db, { bridgeId, ...batch }))
  }
  throw new Error('The spool is never empty')
}

const stored = () => db.select().from(benchEvents).orderBy(asc(benchEvents.sequence))
const sentences = async () => (await stored()).map(({ sentence }) => sentence)

describe('After a restore of the application’s database', () => {
  /** What a backup taken after so many events would hold. */
  async function restore(upTo: number) {
    await db.delete(benchEvents).where(gt(benchEvents.sequence, upTo))
    await db.delete(channelSummaries).where(gt(channelSummaries.sequence, 2 * upTo))
    const marks = { confirmedEvent: upTo, confirmedSummary: 2 * upTo }
    await db.update(spoolMarks).set(marks).where(eq(spoolMarks.bridgeId, bridgeId))
  }

  it('the bridge is not stuck: what it forgot is noted as a gap, once, and all that follows arrives', async () => {
    await happen(100)
    await sendAll()
    await restore(40)
    await happen(50)
    expect(await sendAll()).toBeLessThan(10)
    await happen(10)
    await sendAll()

    const rows = await stored()
    const gaps = rows.filter(({ benchId }) => benchId === null)
    expect(gaps).toMatchObject([
      { sequence: 41, kind: 'warning', data: { firstMissing: 41, lastMissing: 100 } },
    ])
    expect(gaps[0]?.sentence).toContain('Events 41 to 100 of the bridge room-1 cannot be had any more')
    const told = rows.filter(({ benchId }) => benchId !== null).map(({ sentence }) => sentence)
    expect(told).toEqual([...happened.slice(0, 40), ...happened.slice(100)])
    expect(await db.$count(channelSummaries)).toBe(80 + 120)
    expect(await db.query.spoolMarks.findFirst()).toMatchObject({
      confirmedEvent: 160,
      confirmedSummary: 320,
    })
  })

  it('to one with nothing in it all that follows arrives too', async () => {
    await happen(30)
    await sendAll()
    await restore(0)
    await happen(3)
    await sendAll()
    const [gap, ...rows] = await sentences()
    expect(gap).toContain('Events 1 to 30')
    expect(rows).toEqual(happened.slice(30))
  })

  it('that lost nothing there is no gap', async () => {
    await happen(30)
    await sendAll()
    await happen(1)
    await sendAll()
    expect(await sentences()).toEqual(happened)
  })
})

describe('After the loss of a bridge’s spool', () => {
  it.each([1, 29, 30, 31, 75])(
    'nothing of the %i events in the new one is taken for an old one, dropped or doubled',
    async (count) => {
      await happen(30)
      await sendAll()
      await spool.close()
      spool = await openSpoolFile('new.db')
      await happen(count)
      await sendAll()
      await happen(5)
      await sendAll()
      const rows = await stored()
      expect(rows.map(({ sentence }) => sentence)).toEqual(happened)
      expect(rows.map(({ sequence }) => sequence)).toEqual(happened.map((_, index) => index + 1))
      expect(await db.$count(channelSummaries)).toBe(2 * happened.length)
    },
  )

  it('and the return of an older copy of it, what was sent before is not sent twice and what is new is not lost', async () => {
    await happen(25)
    await spool.close()
    copyFileSync(join(directory, 'spool.db'), join(directory, 'copy.db'))
    spool = await openSpoolFile('spool.db')
    await happen(25)
    await sendAll()
    await spool.close()
    spool = await openSpoolFile('copy.db')
    await happen(40)
    await sendAll()
    expect(await sentences()).toEqual(happened)
    expect(await db.$count(channelSummaries)).toBe(2 * happened.length)
  })

  it('events that happen while the answer is on its way keep their order behind those before', async () => {
    await happen(10)
    await sendAll()
    await spool.close()
    spool = await openSpoolFile('new.db')
    await happen(4)
    const batch = await spool.batch(limits)
    const reply = await storeBatch(db, { bridgeId, ...batch })
    await happen(3)
    await spool.settle(reply)
    await happen(2)
    await sendAll()
    expect(await sentences()).toEqual(happened)
  })
})
