import { createHash } from 'node:crypto'
import { asc, eq } from 'drizzle-orm'
import { beforeAll, beforeEach, describe, expect, it, vi } from 'vitest'
import { loadBenchView } from '#app/benches/bench-view.server.ts'
import type { Person } from '#app/context.ts'
import { demoTypedBench } from '#app/db/demo-benches.ts'
import { benchRevisions, imports, readings, rungs, runs, statedDiameters } from '#app/db/schema.ts'
import type { ImportPreview } from '#app/imports/import-view.ts'
import { loadImportedRun } from '#app/imports/imported-run.server.ts'
import { largestCsvBytes, largestRows } from '#app/imports/limits.ts'
import { lookAt } from '#app/imports/preview.server.ts'
import { storeImport } from '#app/imports/store.server.ts'
import { action as enterEdges } from '#app/routes/benches/edges.ts'
import { loadAnalysis } from '#app/runs/analysis.server.ts'
import { moments } from '#app/statistics/moments.ts'
import { type ClassSite, openClassSite, outcome } from '#tests/support/class-site.ts'
import { formRequest, ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'
import { expectNear } from '#tests/support/near.ts'
import {
  classCsv,
  classFields,
  classReadings,
  clearRuns,
  type Fields,
  importClass,
  importFile,
  sendImport,
  storeShown,
} from '#tests/support/send-import.ts'

let site: ClassSite
beforeAll(async () => {
  vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
  site = await openClassSite()
})
beforeEach(() => clearRuns(site.db))

const stored = async () => ({
  runs: await site.db.$count(runs),
  imports: await site.db.$count(imports),
  readings: await site.db.$count(readings),
  diameters: await site.db.$count(statedDiameters),
  rungs: await site.db.$count(rungs),
})
const nothing = { runs: 0, imports: 0, readings: 0, diameters: 0, rungs: 0 }

const send = (person: Person, file: Parameters<typeof sendImport>[2], fields: Fields = {}) =>
  sendImport(site.db, person, file, fields)
const csv = (text: string, name = 'class.csv') => ({ name, text })

async function look(text: string, fields: Fields = {}): Promise<ImportPreview> {
  const { status, reply } = await send(site.student, csv(text), fields)
  if (status !== 200 || !reply?.preview) throw new Error(JSON.stringify(reply))
  return reply.preview
}

const store = (preview: ImportPreview, fields: Fields = {}) =>
  storeShown(site.db, site.student, preview, fields)

describe('The 24 readings of a class, with a field of their own', () => {
  it('become a run of the person’s own, marked imported, with the file’s name and digest', async () => {
    const runId = await importClass(site.db, site.student)
    expect(await stored()).toEqual({ runs: 1, imports: 1, readings: 24, diameters: 24, rungs: 0 })
    const [run] = await site.db.select().from(runs)
    expect(run).toMatchObject({ id: runId, benchId: null, personId: site.student.id })
    expect(run?.endedAt).not.toBeNull()
    const [file] = await site.db.select().from(imports)
    expect(file).toMatchObject({
      runId,
      fileName: 'measurements.csv',
      digest: createHash('sha256').update(classCsv).digest('hex'),
      bytes: classCsv.length,
      rowsLeftOut: 0,
      field: { teslaPerAmp: 0.00073982859, standardUncertainty: 0 },
    })
    const rows = await site.db.select().from(readings).orderBy(asc(readings.number))
    expect(rows.map(({ source }) => source)).toEqual(Array(24).fill('imported'))
    expect(rows.map(({ anodeVolts }) => anodeVolts)).toEqual(classReadings.voltsV)
    expect(rows.map(({ coilAmps }) => coilAmps)).toEqual(classReadings.ampsA)
    const widths = await site.db.select().from(statedDiameters)
    expect(widths.map(({ diameterMetres }) => diameterMetres).sort()).toEqual(
      classReadings.diameterCm.map((cm) => Number(`${cm}e-2`)).sort(),
    )
  })

  it('have the mean and scatter of e/m that were computed from them elsewhere', async () => {
    const runId = await importClass(site.db, site.student)
    const { readings: rows } = await loadImportedRun(site.db, { runId, person: site.student })
    const values = rows.map(({ result, anodeVolts }) => {
      if (!result) throw new Error('A reading has no e/m')
      // The source has η₀ = 2V/(Br)²; with η = 2V/((Br)² − V²/c²) it is 1/η₀ = 1/η + V/2c².
      return 1 / (1 / result.chargeToMass + anodeVolts / (2 * 299_792_458 ** 2))
    })
    const { mean, standardDeviation } = moments(values)
    expectNear(mean, classReadings.expected.mean_em, { rel: 1e-6 })
    expectNear(standardDeviation, classReadings.expected.sd_em, { rel: 1e-6 })
  })

  it('have their stated uncertainties and nothing besides: 2u(d)/d, u(V)/V and 2u(I)/I together', async () => {
    const runId = await importClass(site.db, site.student)
    const [first] = (await loadImportedRun(site.db, { runId, person: site.student })).readings
    const relative = (first?.result?.standardUncertainty ?? 0) / (first?.result?.chargeToMass ?? 1)
    expectNear(relative, Math.hypot((2 * 0.2) / 8.1, 1 / 150, (2 * 0.01) / 1.54), { rel: 1e-3 })
    expectNear(first?.result?.coverageFactor ?? 0, 1.96, { rel: 1e-3 })
    expect([first?.uAnodeVolts, first?.uCoilAmps]).toEqual([1, 0.01])
  })

  it('can be analysed as any series', async () => {
    const runId = await importClass(site.db, site.student)
    const asked = { runId, person: site.student, line: 'intercept', method: 'both-errors' } as const
    const { rows, run, diagnosis, monteCarlo } = await loadAnalysis(site.db, asked)
    expect(rows.filter(({ leftOut }) => leftOut === null)).toHaveLength(24)
    expect(run).toMatchObject({ bench: null, fileName: 'measurements.csv' })
    expect(diagnosis?.further).toEqual([])
    expect(monteCarlo?.bench.coilPair).toBeNull()
  })
})

describe('Looking at a file', () => {
  it('guesses what it holds, shows what would be stored, and stores nothing', async () => {
    const preview = await look(classCsv, classFields)
    expect(preview.choice.columns).toEqual([
      { role: 'voltage', unit: 'V' },
      { role: 'current', unit: 'A' },
      { role: 'diameter', unit: 'cm' },
    ])
    expect(preview).toMatchObject({ problems: [], goodCount: 24, badCount: 0, before: [] })
    expect(preview.rows[0]).toMatchObject({
      line: 2,
      voltage: { value: 150, standardUncertainty: 1 },
      diameter: { value: 0.081, standardUncertainty: 0.002 },
    })
    expect(await stored()).toEqual(nothing)
  })

  it('says what has still to be chosen, and stores nothing before it is', async () => {
    const preview = await look('V,I,d\n150,1.54,8.1\n')
    expect(preview.problems).toEqual([
      'Choose the bench whose data these readings use, or state a field factor of their own.',
    ])
    expect(preview.bad[0]?.reasons).toEqual(['diameter: has no unit: choose it'])
    expect((await store(preview)).status).toBe(400)
    expect((await store(preview, { bench: 'bench-1' })).status).toBe(400)
    expect(await stored()).toEqual(nothing)
    const chosen = { bench: 'bench-1', role: ['voltage', 'current', 'diameter'], unit: ['V', 'A', 'cm'] }
    const changed = await store(preview, chosen)
    expect([changed.status, changed.reply?.hasChanged]).toEqual([400, true])
    expect(await stored()).toEqual(nothing)
    if (!changed.reply?.preview) throw new Error('Nothing was shown')
    expect((await store(changed.reply.preview)).status).toBe(302)
    expect((await stored()).readings).toBe(1)
  })

  it.each([
    [{ teslaPerAmp: '' }, 'Type the field factor'],
    [{ teslaPerAmp: '0' }, 'between 0 and 1 T/A'],
    [{ teslaPerAmp: '7.4e-4 T/A' }, 'something behind it'],
    [{ uTeslaPerAmp: '-1e-6' }, '0 or more'],
    [{ uTeslaPerAmp: '1e-3' }, 'less than the factor'],
  ])('does not take the field factor %j', async (fields, words) => {
    const preview = await look(classCsv, { ...classFields, ...fields })
    expect(preview.problems.join()).toContain(words)
    expect((await store(preview)).status).toBe(400)
    expect(await stored()).toEqual(nothing)
  })

  it('guesses anew when the file is read in another way', async () => {
    const text = 'V;I;d (cm)\n150,0;1,54;8,1\n165,0;1,50;8,7\n'
    const preview = await look(text, { ...classFields, allVoltage: '', allCurrent: '', allLength: '' })
    expect(preview).toMatchObject({ delimiter: 'semicolon', decimal: ',', goodCount: 2 })
    const again = await look(text, {
      ...classFields,
      delimiter: 'comma',
      seen: preview.choice.seen,
      role: ['voltage'],
      unit: ['V'],
    })
    expect(again.choice.columns.map((column) => column?.role)).not.toContain('voltage')
    expect(again.problems.length).toBeGreaterThan(0)
  })

  it('tells when this person has imported the same file before', async () => {
    const runId = await importClass(site.db, site.student)
    expect((await look(classCsv, classFields)).before).toMatchObject([{ runId }])
    const { reply } = await send(site.partner, csv(classCsv), classFields)
    expect(reply?.preview?.before).toEqual([])
  })
})

describe('Bad rows', () => {
  const text = 'V,I,d (cm)\n150,1.54,8.1\n=1+1,1.5,8.7\n165,1.5,0\n165,1.5,870\n165,1.5,8.7\n'

  it('are shown with the reason beside each, and left out of what is stored', async () => {
    const preview = await look(text, { bench: 'bench-1' })
    expect(preview.bad).toEqual([
      { line: 3, cells: ['=1+1', '1.5', '8.7'], reasons: ['anode voltage: “=1+1” is not a number'] },
      { line: 4, cells: ['165', '1.5', '0'], reasons: ['diameter: “0” has to be above 0'] },
      {
        line: 5,
        cells: ['165', '1.5', '870'],
        reasons: ['these values give no orbit of Bench 1: look at the units'],
      },
    ])
    expect((await store(preview)).status).toBe(302)
    const [file] = await site.db.select().from(imports)
    expect([file?.rowsLeftOut, (await stored()).readings]).toEqual([3, 2])
  })

  it('alone leave nothing to be stored', async () => {
    const preview = await look('V,I,d (cm)\nNaN,1.54,8.1\n', { bench: 'bench-1' })
    expect(preview).toMatchObject({ goodCount: 0, badCount: 1, problems: [] })
    expect((await store(preview)).status).toBe(400)
    expect(await stored()).toEqual(nothing)
  })
})

describe('Readings that use the data of a bench', () => {
  const text = 'V,I,d (cm)\n200,2.2,7.20\n'
  const importOn = async (bench: string, fields: Fields = {}, file = text) => {
    const { status, runId } = await importFile(site.db, site.student, csv(file), { bench, ...fields })
    expect(status).toBe(302)
    const { readings: rows, file: kept } = await loadImportedRun(site.db, { runId, person: site.student })
    return { runId, rows, kept }
  }

  it('keep its revision, with its parallax taken out of what was read on its ruler', async () => {
    const { rows } = await importOn('bench-2')
    expect(rows[0]).toMatchObject({ revision: 1, source: 'imported' })
    // (L − δ)/L of this bench: 0.52/0.6.
    expectNear(rows[0]?.result?.diameterMetres ?? 0, (0.072 * 0.52) / 0.6, { rel: 1e-12 })
    const { rows: beams } = await importOn('bench-2', { reads: 'beam' })
    expectNear(beams[0]?.result?.diameterMetres ?? 0, 0.072, { rel: 1e-12 })
  })

  it('have half of the last digit and the accuracy of its meters where nothing is stated', async () => {
    const { rows } = await importOn('bench-2')
    // ±(0.1 % + 2 × 0.01 V) and a last digit of 1 V (JCGM 100:2008, 4.3.7 and F.2.2.1).
    expectNear(rows[0]?.uAnodeVolts ?? 0, Math.sqrt(0.22 ** 2 / 3 + 1 / 12), { rel: 1e-12 })
    const { rows: stated } = await importOn('bench-2', { allVoltage: '0.3' })
    expect(stated[0]?.uAnodeVolts).toBe(0.3)
    const shares = (groups: { name: string; share: number }[] = []) =>
      groups.find(({ name }) => name === 'anode voltage')?.share ?? 0
    const relative = (stated[0]?.result?.standardUncertainty ?? 0) / (stated[0]?.result?.chargeToMass ?? 1)
    expectNear(shares(stated[0]?.result?.groups) * relative ** 2, (0.3 / 200) ** 2, { rel: 1e-3 })
  })

  it('may have edges, which are kept', async () => {
    const { rows } = await importOn('bench-1', {}, 'V,I,left cm,right cm\n200,1.5,3.35,11.15\n')
    expect(rows[0]?.stated).toMatchObject({ leftMetres: 0.0335, rightMetres: 0.1115 })
    expectNear(rows[0]?.result?.diameterMetres ?? 0, 0.078, { rel: 1e-12 })
  })

  it('may have rungs, where the bench has them', async () => {
    const config = {
      ...demoTypedBench,
      scale: {
        kind: 'rungs' as const,
        rungs: [{ name: '8 cm', distanceMetres: 0.08 }],
        uDistanceMetres: 0.0002,
      },
    }
    const revise = (to: typeof config | typeof demoTypedBench) =>
      site.db.update(benchRevisions).set({ config: to }).where(eq(benchRevisions.benchId, 'bench-4'))
    await revise(config)
    try {
      const { rows } = await importOn('bench-4', {}, 'V,I,rung,moved (A)\n200,1.52,8 cm,0.02\n')
      expect(rows[0]?.rung).toMatchObject({ rung: '8 cm', settingHalfWidthAmps: 0.02 })
      expect(rows[0]?.result?.diameterMetres).toBe(0.08)
      expect(await stored()).toMatchObject({ rungs: 1, diameters: 0 })
    } finally {
      await revise(demoTypedBench)
    }
  })

  it('do not become the bench’s open run, and are no readings taken at it', async () => {
    const { rows, runId } = await importOn('bench-1', {}, 'V,I,d (cm)\n200,1.5,8.1\n')
    const view = await loadBenchView(site.db, { benchId: 'bench-1', person: site.student })
    expect(view).toMatchObject({ run: null, readings: [] })
    const path = `/benches/bench-1/readings/${rows[0]?.id}/edges`
    const args = routeArgs(
      formRequest(path, { left: '3', right: '11' }),
      routeContext(site.db, site.student),
      {
        benchId: 'bench-1',
        readingId: rows[0]?.id ?? '',
      },
    )
    expect((await outcome(enterEdges(args as never))).status).toBe(404)
    expect(
      (await loadAnalysis(site.db, { runId, person: site.student, line: 'origin', method: 'ordinary' })).run
        .bench?.id,
    ).toBe('bench-1')
  })
})

describe('A file that is refused leaves nothing behind', () => {
  const cases: [string, { name: string; text: string | Uint8Array } | null, RegExp][] = [
    ['none at all', null, /Choose a CSV file/],
    ['an empty one', csv(''), /empty/],
    ['a large one', csv(`V,I\n${'1,2\n'.repeat(largestCsvBytes / 4)}`), /thousand bytes/],
    ['one with too many rows', csv(`V,I,d (cm)\n${'150,1.5,8\n'.repeat(largestRows + 1)}`), /At most 500/],
    [
      'a picture',
      { name: 'readings.csv', text: new Uint8Array([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a, 0, 0]) },
      /not a text file/,
    ],
  ]
  it.each(cases)('%s', async (_, file, words) => {
    const { status, reply } = await send(site.student, file, { ...classFields, intent: 'store' })
    expect(status).toBe(400)
    expect(reply?.preview).toBeNull()
    expect(reply?.fileErrors.join()).toMatch(words)
    expect(await stored()).toEqual(nothing)
  })

  it('and neither does a transaction that fails', async () => {
    const bytes = new TextEncoder().encode(classCsv)
    const file = { name: 'x.csv', bytes, digest: 'none', isNew: true }
    const { choice } = await look(classCsv, classFields)
    const looked = await lookAt(site.db, { file, choice: { ...choice, seen: '' }, person: site.student })
    await expect(storeImport(site.db, { looked, personId: 'nobody' })).rejects.toThrow()
    expect(await stored()).toEqual(nothing)
  })
})

describe('What a file brings along', () => {
  it('is text: its name without folders and signs that cannot be seen, its cells at most forty characters long', async () => {
    const name = '..\\..\\=cmd\u202e\u0007.csv'
    const file = csv(`V,I,d (cm)\n<b onclick=x>${'y'.repeat(100)}</b>,1.5,8\n`, name)
    const { reply } = await send(site.student, file, { bench: 'bench-1' })
    expect(reply?.preview?.fileName).toBe('=cmd.csv')
    expect(reply?.preview?.bad[0]?.cells[0]?.length).toBe(41)
  })

  it('is read anew from the bytes at the last step, whatever the form says of it', async () => {
    const preview = await look(classCsv, classFields)
    const { status } = await store(preview, { digest: 'forged', goodCount: '1' })
    expect(status).toBe(302)
    const [file] = await site.db.select().from(imports)
    expect(file?.digest).toBe(preview.digest)
  })
})
