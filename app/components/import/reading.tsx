import { useId } from 'react'
import type { ImportBench, ImportPreview } from '#app/imports/import-view.ts'
import { statements } from '#app/imports/mapping.ts'
import { ImportSection } from './import-section.tsx'
import { Select } from './select.tsx'

const delimiterWords = { tab: 'tabs', semicolon: 'semicolons', comma: 'commas' }
const decimalWords = { '.': 'point', ',': 'comma' }

/** How the file is read where the guess may be wrong, and what is known of the uncertainties. */
export function Reading({ preview, benches }: { preview: ImportPreview; benches: ImportBench[] }) {
  const { choice, delimiter, decimal, headingRow } = preview
  const bench = benches.find(({ id }) => id === choice.bench)
  const hasLengths = !choice.columns.some((column) => column?.role === 'rung')
  const unitOf = (...wanted: string[]) =>
    choice.columns.find((column) => column && wanted.includes(column.role))?.unit ?? ''
  return (
    <>
      <ImportSection title="Uncertainties">
        <div className="flex flex-wrap items-end gap-x-6 gap-y-3">
          <ForAll name="allVoltage" what="voltage" unit={unitOf('voltage')} value={choice.forAll.voltage} />
          <ForAll name="allCurrent" what="current" unit={unitOf('current')} value={choice.forAll.current} />
          {hasLengths && (
            <ForAll
              name="allLength"
              what={unitOf('radius') ? 'radius' : unitOf('left') ? 'each edge' : 'diameter'}
              unit={unitOf('diameter', 'radius', 'left')}
              value={choice.forAll.length}
            />
          )}
          <div className="w-80 max-w-full">
            <Select
              name="statedAs"
              label="They are stated as"
              value={choice.statedAs}
              options={Object.entries(statements).map(([value, { words }]) => [value, words] as const)}
            />
          </div>
        </div>
        <p className="max-w-prose text-[12.5px] text-ink-soft">
          One for all rows, where the file has no column of them. What is stated is taken for all of it, and
          as each reading’s own. Where nothing is stated, half of the last digit counts, and with a bench the
          accuracy of its meters.
        </p>
      </ImportSection>
      <ImportSection title="How the file is read">
        <div className="grid gap-x-6 gap-y-3 sm:grid-cols-[repeat(auto-fill,minmax(210px,1fr))]">
          <Select
            name="delimiter"
            label="Columns are separated by"
            value={choice.delimiter}
            options={[
              ['auto', `${delimiterWords[delimiter]}, as recognised`],
              ['comma', 'commas'],
              ['semicolon', 'semicolons'],
              ['tab', 'tabs'],
            ]}
          />
          <Select
            name="decimal"
            label="Decimal mark"
            value={choice.decimal}
            options={[
              ['auto', `${decimalWords[decimal]}, as recognised`],
              ['.', 'point'],
              [',', 'comma'],
            ]}
          />
          <Select
            name="headingRow"
            label="Headings stand in"
            value={String(choice.headingRow)}
            options={[
              ['auto', headingRow === 0 ? 'no row, as recognised' : `row ${headingRow}, as recognised`],
              ['0', 'no row'],
              ...[1, 2, 3, 4, 5, 6].map((row) => [String(row), `row ${row}`] as const),
            ]}
          />
          {bench?.scale === 'ruler-behind' && hasLengths ? (
            <Select
              name="reads"
              label="Lengths are"
              value={choice.isOnScale ? 'scale' : 'beam'}
              options={[
                ['scale', 'as read on the ruler behind the beam'],
                ['beam', 'the beam’s own, parallax taken out'],
              ]}
            />
          ) : (
            <input type="hidden" name="reads" value={choice.isOnScale ? 'scale' : 'beam'} />
          )}
        </div>
      </ImportSection>
    </>
  )
}

type ForAllProps = { name: string; what: string; unit: string; value: string }

function ForAll({ name, what, unit, value }: ForAllProps) {
  const id = useId()
  return (
    <div className="grid gap-1">
      <label htmlFor={id} className="text-[12.5px] text-ink-soft">
        of the {what}
        {unit && unit !== 'cells' && `, ${unit}`}
      </label>
      <input
        id={id}
        name={name}
        defaultValue={value}
        inputMode="decimal"
        autoComplete="off"
        placeholder="not stated"
        className="min-h-9 w-36 px-3 text-right placeholder:text-ink-soft touch:min-h-12"
      />
    </div>
  )
}
