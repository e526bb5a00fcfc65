import { unitInCells } from '#app/imports/cell.ts'
import type { ImportPreview } from '#app/imports/import-view.ts'
import { type ColumnMapping, type Role, roles, roleWords, unitsOf } from '#app/imports/mapping.ts'
import { ImportSection } from './import-section.tsx'
import { Select } from './select.tsx'

/** What each column of the file holds and in which unit: guessed by its heading, and to be put right. */
export function Columns({ preview }: { preview: ImportPreview }) {
  const { headings, samples, choice } = preview
  return (
    <ImportSection title="What the columns hold">
      <ol className="grid gap-x-6 gap-y-4 sm:grid-cols-[repeat(auto-fill,minmax(290px,1fr))]">
        {headings.map((heading, i) => (
          // biome-ignore lint/suspicious/noArrayIndexKey: a column is told by its place alone
          <li key={i} className="grid min-w-0 content-start gap-1.5 border-l border-edge pl-3">
            <p className="min-w-0">
              <b className="block truncate font-medium">{heading || `column ${i + 1}`}</b>
              <span className="block truncate text-[12.5px] text-ink-soft">
                {samples[i]?.filter((cell) => cell !== '').join(' · ') || 'empty'}
              </span>
            </p>
            <Column name={heading || `column ${i + 1}`} column={choice.columns[i] ?? null} />
          </li>
        ))}
      </ol>
    </ImportSection>
  )
}

const roleOptions: [string, string][] = [
  ['', 'not used'],
  ...roles.map((role): [string, string] => [role, roleWords[role]]),
]

function Column({ name, column }: { name: string; column: ColumnMapping | null }) {
  return (
    <div className="grid grid-cols-[minmax(0,1fr)_6.5rem] gap-2">
      <Select
        name="role"
        label={`What ${name} holds`}
        isLabelHidden
        value={column?.role ?? ''}
        options={roleOptions}
      />
      {column ? (
        <Select
          key={column.role}
          name="unit"
          label={`Unit of ${name}`}
          isLabelHidden
          value={column.unit}
          options={unitOptions(column.role)}
        />
      ) : (
        // Roles and units go in pairs.
        <input type="hidden" name="unit" value="" />
      )}
    </div>
  )
}

const unitOptions = (role: Role): [string, string][] => [
  ['', role === 'rung' ? 'its name' : 'unit?'],
  ...Object.keys(unitsOf[role]).map((unit): [string, string] => [unit, unit]),
  [unitInCells, 'in cells'],
]
