import { href, useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import type { AnalysisView } from '#app/runs/analysis-view.ts'
import { AnswerLine } from '../answer-line.tsx'
import { estimate, inElevens, percent, probability } from './figures.ts'
import { Heads, ScrollTable } from './section.tsx'

const cell = 'px-2 py-1'

/** What the readings say of the effects that shift e/m, and what they cannot say. */
export function Diagnosis({ view }: { view: AnalysisView }) {
  const { diagnosis } = view
  if (!diagnosis)
    return (
      <p className="max-w-prose text-ink-soft">
        {view.reductions.join(' ') || 'There is nothing to fit yet.'}
      </p>
    )
  const { finding, effects, subsets, notApart, unseen, checks } = diagnosis
  return (
    <div className="grid grid-cols-1 gap-4">
      <Sentences sentences={finding} className="text-[15px]" />
      {checks.length > 0 && <List title="What to check at the bench" sentences={checks} />}
      <ScrollTable label="Effects in the general model">
        <Heads names={['effect', 'in the general model', 'were it the only one', 'e/m would then move by']} />
        <tbody>
          {effects.map((effect) => (
            <tr key={effect.name} className="border-b border-rule">
              <th scope="row" className="py-1 pr-2 text-left font-normal">
                {effect.name}
              </th>
              <td className={cell}>
                {estimate(effect)} {effect.unit}
              </td>
              <td className={cell}>
                {effect.alone ? `${estimate(effect.alone)} ${effect.unit}` : '—'}
                {effect.alone && !effect.alone.isPlausible && ', far too large'}
              </td>
              <td className={cell}>{effect.alone ? percent(effect.alone.change) : '—'}</td>
            </tr>
          ))}
        </tbody>
      </ScrollTable>
      {notApart.length > 0 && <List title="What these readings cannot tell apart" sentences={notApart} />}
      <List title="What no such readings can show" sentences={unseen} />
      <Further view={view} />
      <details className="min-w-0">
        <summary className="w-fit cursor-pointer text-ink-soft touch:py-3.5">
          every combination of effects
        </summary>
        <ScrollTable label="Every combination of effects">
          <Heads names={['effects', 'e/m 10¹¹ C/kg', 'their sizes', 'χ²', 'ν', 'p', 'AICc']} />
          <tbody>
            {subsets.map((subset) => (
              <tr key={subset.effects} className="border-b border-rule">
                <th scope="row" className="py-1 pr-2 text-left font-normal">
                  {subset.effects}
                </th>
                <td className={cell}>{inElevens(subset.chargeToMass)}</td>
                <td className={`${cell} text-left`}>{subset.parameters}</td>
                <td className={cell}>{subset.chiSquared.toPrecision(4)}</td>
                <td className={cell}>{subset.degreesOfFreedom}</td>
                <td className={cell}>{probability(subset.pValue)}</td>
                <td className={cell}>{subset.aicc?.toFixed(1) ?? '—'}</td>
              </tr>
            ))}
          </tbody>
        </ScrollTable>
        <p className="max-w-prose text-[12.5px] text-ink-soft">
          Choosing one of these afterwards and stating its uncertainty would claim too much: the stated result
          comes from the model with every effect in it.
        </p>
      </details>
    </div>
  )
}

function Sentences({ sentences, className }: { sentences: string[]; className?: string }) {
  return (
    <div className={`grid max-w-prose gap-2 ${className ?? ''}`}>
      {sentences.map((sentence) => (
        <p key={sentence}>{sentence}</p>
      ))}
    </div>
  )
}

function List({ title, sentences }: { title: string; sentences: string[] }) {
  return (
    <div className="grid max-w-prose gap-1">
      <h3 className="font-medium">{title}</h3>
      <ul className="grid list-disc gap-1 pl-5 text-ink-soft">
        {sentences.map((sentence) => (
          <li key={sentence}>{sentence}</li>
        ))}
      </ul>
    </div>
  )
}

const settingWords = ({
  anodeVolts,
  coilAmps,
  polarity,
}: {
  anodeVolts: number
  coilAmps: number
  polarity: 1 | -1
}) => `${anodeVolts.toFixed(0)}\u2009V, ${coilAmps.toFixed(2)}\u2009A${polarity === -1 ? ', reversed' : ''}`

/** The settings that would tell more, and the plan that they go into with one press. */
function Further({ view }: { view: AnalysisView }) {
  const { run, plan, diagnosis } = view
  const fetcher = useFetcher<ActionReply>()
  const further = diagnosis?.further ?? []
  return (
    <div className="grid max-w-prose gap-2">
      {further.length > 0 && (
        <>
          <h3 className="font-medium">What to measure next</h3>
          <fetcher.Form
            method="post"
            action={href('/runs/:runId/plan', { runId: run.id })}
            className="grid justify-items-start gap-2"
          >
            <input type="hidden" name="intent" value="add" />
            <ul className="grid list-disc gap-1 pl-5">
              {further.map((setting) => (
                <li key={settingWords(setting)}>
                  <b className="font-medium">{settingWords(setting)}</b>{' '}
                  <span className="text-ink-soft">{setting.why}</span>
                  <input type="hidden" name="anodeVolts" value={setting.anodeVolts} />
                  <input type="hidden" name="coilAmps" value={setting.coilAmps} />
                  <input type="hidden" name="polarity" value={setting.polarity} />
                </li>
              ))}
            </ul>
            <button type="submit" className="button" disabled={fetcher.state !== 'idle'}>
              Add to the plan of this run
            </button>
          </fetcher.Form>
        </>
      )}
      <AnswerLine reply={fetcher.data} className="text-[12.5px] text-ink-soft" />
      {plan.length > 0 && (
        <>
          <h3 className="font-medium">Planned</h3>
          <ul className="grid gap-1">
            {plan.map((setting) => (
              <li key={setting.id} className="flex flex-wrap items-center gap-3">
                <span className={setting.isRead ? 'text-ink-soft line-through' : ''}>
                  {settingWords(setting)}
                </span>
                {setting.isRead ? (
                  <span className="text-[12.5px] text-ink-soft">read</span>
                ) : (
                  <fetcher.Form method="post" action={href('/runs/:runId/plan', { runId: run.id })}>
                    <input type="hidden" name="intent" value="remove" />
                    <input type="hidden" name="settingId" value={setting.id} />
                    <button type="submit" className="link-alone text-[12.5px] text-ink-soft">
                      take off
                    </button>
                  </fetcher.Form>
                )}
              </li>
            ))}
          </ul>
        </>
      )}
    </div>
  )
}
