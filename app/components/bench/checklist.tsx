import { useId, useState } from 'react'
import { href, useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import type { TypedBenchView } from '#app/benches/bench-view.server.ts'
import { AnswerLine } from '../answer-line.tsx'
import { LocalTime } from '../local-time.tsx'
import { MakeContact } from './contact-chain.tsx'
import { hasTicked } from './typed-steps.ts'

/** The interlock chain of a bench without ports: contacts that a person looks at and ticks, once a run. */
export function Checklist({ view }: { view: TypedBenchView }) {
  const id = useId()
  return (
    <section aria-labelledby={id} className="grid gap-3 border-x-[3px] border-ink px-4 py-1">
      <div className="flex flex-wrap items-baseline gap-x-4 gap-y-1">
        <h2 id={id} className="font-medium">
          Interlock chain: a checklist
        </h2>
        <p className="text-ink-soft">
          No instruments: nothing here is watched, and nothing is switched from here.
        </p>
      </div>
      {hasTicked(view) ? <TickedChain view={view} /> : <TickForm view={view} />}
    </section>
  )
}

/** As it was ticked: what a person saw then. */
function TickedChain({ view }: { view: TypedBenchView }) {
  const { checklist } = view.bench.config
  return (
    <>
      <ul aria-label="Contacts as they were ticked" className="grid grid-cols-3 gap-y-2 sm:flex sm:flex-wrap">
        {checklist.map(({ contact }) => (
          <li key={contact} className="min-w-16 flex-1 text-center text-[11px] leading-tight text-ink-soft">
            <MakeContact isClosed />
            {contact}
          </li>
        ))}
      </ul>
      <p>
        Ticked for this run by <Tickers view={view} />.{' '}
        <span className="text-ink-soft">It tells what was seen then.</span>
      </p>
      <details>
        <summary className="w-fit cursor-pointer text-ink-soft touch:py-3">what was ticked</summary>
        <ul className="mt-1 grid gap-1">
          {checklist.map(({ contact, statement }) => (
            <li key={contact}>
              <span className="text-ink-soft">{contact}:</span> {statement}
            </li>
          ))}
        </ul>
      </details>
    </>
  )
}

function Tickers({ view }: { view: TypedBenchView }) {
  return view.ticked.map(({ personId, name, at }, index) => (
    <span key={`${personId} ${at}`}>
      {index > 0 && ', '}
      {name} at <LocalTime iso={at} parts="time" />
    </span>
  ))
}

function TickForm({ view }: { view: TypedBenchView }) {
  const { checklist, benchId } = view.bench.config
  const fetcher = useFetcher<ActionReply>()
  const [ticked, setTicked] = useState<string[]>([])
  const isTicked = (contact: string) => ticked.includes(contact)
  const tick = (contact: string) =>
    setTicked((before) =>
      before.includes(contact) ? before.filter((it) => it !== contact) : [...before, contact],
    )
  return (
    <fetcher.Form
      method="post"
      action={href('/benches/:benchId/checklist', { benchId })}
      className="grid gap-3"
    >
      <fieldset disabled={!view.cautionsAcknowledged} className="min-w-0">
        <legend className="sr-only">Tick each contact that holds now</legend>
        <ul className="grid gap-x-6 sm:grid-cols-[repeat(auto-fill,minmax(320px,1fr))]">
          {checklist.map(({ contact, statement }) => (
            <li key={contact} className="border-b border-rule">
              <label className="grid cursor-pointer grid-cols-[auto_auto_1fr] items-center gap-x-3 py-2 touch:min-h-12">
                <input
                  type="checkbox"
                  name="contact"
                  value={contact}
                  checked={isTicked(contact)}
                  onChange={() => tick(contact)}
                />
                <span className={`w-16 ${isTicked(contact) ? 'text-ink-soft' : 'text-caution'}`}>
                  <MakeContact isClosed={isTicked(contact)} />
                </span>
                <span className="leading-snug">
                  <b className="font-medium">{contact}.</b> {statement}
                </span>
              </label>
            </li>
          ))}
        </ul>
      </fieldset>
      <div className="flex flex-wrap items-center gap-x-4 gap-y-2">
        <button
          type="submit"
          disabled={!view.cautionsAcknowledged || fetcher.state !== 'idle'}
          className="button button-main max-sm:w-full"
        >
          I have looked at each of these
        </button>
        <p className="text-[12.5px] text-ink-soft">
          {view.ticked.length > 0 && (
            <>
              Ticked for this run by <Tickers view={view} />.{' '}
            </>
          )}
          Noted with your name and the time; asked again for each run.
        </p>
        <AnswerLine reply={fetcher.data} className="basis-full" />
      </div>
    </fetcher.Form>
  )
}
