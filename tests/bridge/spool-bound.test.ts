import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { expect, it } from 'vitest'
import { openSpool } from '#bridge/spool.ts'

it('The spool drops its oldest summaries, and no event, while the app stays away for long', async () => {
  const directory = mkdtempSync(join(tmpdir(), 'spool-bound-'))
  const spool = await openSpool(`file:${join(directory, 'spool.db')}`, { mostSummaries: 20 })
  const event = { benchId: 'bench-1', kind: 'warning', personId: null, personName: null, data: {} } as const
  for (let second = 1; second <= 50; second++) {
    await spool.addEvents([{ ...event, at: second, sentence: `Second ${second}.` }])
    await spool.addSummaries([
      { benchId: 'bench-1', second, channel: 'anodeVolts', min: 0, mean: second, max: 100, count: 10 },
    ])
  }
  const { events, summaries, oldest } = await spool.batch({ events: 1000, summaries: 1000 })
  expect(events).toHaveLength(50)
  expect(oldest).toEqual({ event: 1, summary: 31 })
  expect(summaries.map(({ second }) => second)).toEqual(Array.from({ length: 20 }, (_, i) => 31 + i))
  await spool.close()
  rmSync(directory, { recursive: true, force: true })
})
