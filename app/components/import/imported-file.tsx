import type { ImportedRunView } from '#app/imports/imported-run.server.ts'
import { roleWords, statements } from '#app/imports/mapping.ts'
import { formatConcise } from '#app/metrology/format.ts'
import { ImportSection } from './import-section.tsx'

type Props = { file: ImportedRunView['file']; revision: number | null }

/** The file and how it was read: what anyone needs to do the same again. */
export function ImportedFile({ file, revision }: Props) {
  const { mapping, field } = file
  const unitOf = (...roles: string[]) => mapping.columns.find(({ role }) => roles.includes(role))?.unit ?? ''
  const stated = [
    ['voltage', mapping.forAll.voltage, unitOf('voltage')],
    ['current', mapping.forAll.current, unitOf('current')],
    ['length', mapping.forAll.length, unitOf('diameter', 'radius', 'left')],
  ].filter(([, text]) => text?.trim())
  return (
    <ImportSection title="The file, and how it was read">
      <dl className="grid gap-x-6 gap-y-1.5 sm:grid-cols-[14rem_minmax(0,1fr)]">
        <Entry name="file">
          {file.fileName}, {file.bytes.toLocaleString('en')} bytes
        </Entry>
        <Entry name="SHA-256">{file.digest}</Entry>
        <Entry name="rows left out">{file.rowsLeftOut}</Entry>
        {field ? (
          <Entry name="field factor">
            {field.standardUncertainty > 0
              ? `${formatConcise(field.teslaPerAmp, field.standardUncertainty, { exponent: -4 })} × 10⁻⁴ T/A`
              : `${field.teslaPerAmp} T/A, taken as exact`}
          </Entry>
        ) : (
          <Entry name="data of the bench">revision {revision}</Entry>
        )}
        <Entry name="columns">
          {mapping.columns
            .map(
              ({ heading, index, role, unit }) =>
                `${heading || `column ${index + 1}`}: ${roleWords[role]}${unit ? `, ${unit === 'cells' ? 'unit in the cells' : unit}` : ''}`,
            )
            .join('; ')}
        </Entry>
        <Entry name="uncertainties">
          {stated.map(([what, text, unit]) => `${what} ± ${text} ${unit} for all rows`).join(', ')}
          {stated.length > 0 && '; '}
          {statements[mapping.statedAs].words}, where any are stated
        </Entry>
        <Entry name="separated by, decimal mark">
          {mapping.delimiter}, {mapping.decimal === ',' ? 'comma' : 'point'}
        </Entry>
        {!mapping.isOnScale && <Entry name="lengths">the beam’s own, parallax taken out</Entry>}
      </dl>
    </ImportSection>
  )
}

function Entry({ name, children }: { name: string; children: React.ReactNode }) {
  return (
    <>
      <dt className="text-ink-soft">{name}</dt>
      <dd className="wrap-anywhere max-sm:pb-1.5">{children}</dd>
    </>
  )
}
