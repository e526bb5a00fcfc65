import type { OwnValue, RelationView } from '#app/runs/relation-view.ts'
import { inElevens } from '../analysis/figures.ts'
import { Heads, ScrollTable, Section } from '../analysis/section.tsx'
import { fixed } from '../figures.ts'
import { LocalTime } from '../local-time.tsx'
import { coilsWords } from './coils-words.ts'

const cell = 'px-2 py-1'
const heads = ['reading', 'yours', 'logbook', 'anode V', 'each coil A', 'd cm']

/** The relation of a person that held, and what it makes of the readings of the open run. */
export function OwnValues({ relation, values, coils }: Pick<RelationView, 'relation' | 'values' | 'coils'>) {
  return (
    <Section id="own" title="Your relation, with the readings">
      {relation ? (
        <>
          <p className="max-w-prose">
            <span className="wrap-anywhere">e/m = {relation.readAs}</span>{' '}
            <span className="text-ink-soft">
              checked <LocalTime iso={relation.checkedAt} parts="date and time" />.
              {relation.isHelmholtz && ` ${coilsWords(coils)}`}
            </span>
          </p>
          <Values values={values} />
        </>
      ) : (
        <p className="max-w-prose text-ink-soft">
          A relation that holds is kept here, and gives a value of e/m for each reading of the open run.
        </p>
      )}
    </Section>
  )
}

function Values({ values }: { values: OwnValue[] | null }) {
  if (!values || values.length === 0)
    return (
      <p className="text-ink-soft">
        {values
          ? 'No reading of the open run has its beam read yet.'
          : 'There is no open run at this bench: with its first reading there is a value.'}
      </p>
    )
  return (
    <>
      <ScrollTable label="Values by your own relation, e/m in 10¹¹ C/kg">
        <Heads names={heads} />
        <tbody>
          {values.map((it) => (
            <tr key={it.number} className="border-b border-rule">
              <th scope="row" className="py-1 pr-2 text-left font-normal">
                {it.number}
                {it.polarity === -1 && <span className="text-ink-soft"> −B</span>}
              </th>
              <td className={`${cell} text-beam`}>{fixed(it.own && it.own / 1e11, 3)}</td>
              <td className={cell}>{it.logbook ? inElevens(it.logbook) : '—'}</td>
              <td className={cell}>{fixed(it.anodeVolts, 2)}</td>
              <td className={cell}>{fixed(it.coilAmps, 4)}</td>
              <td className={cell}>{fixed(it.diameterMetres * 100, 2)}</td>
            </tr>
          ))}
        </tbody>
      </ScrollTable>
      <p className="max-w-prose text-[12.5px] text-ink-soft">
        Yours and the logbook’s e/m in 10¹¹ C/kg. Your relation takes the field of the middle for all of the
        orbit, and V and I as the meters show them; the logbook goes on from there.
      </p>
    </>
  )
}
