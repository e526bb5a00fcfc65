import { useId, useState } from 'react'
import { href, Link, useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import { photoPath } from '#app/benches/bench-path.ts'
import type { BenchView, ReadingView, TypedBenchView } from '#app/benches/bench-view.server.ts'
import { AnswerLine } from '../answer-line.tsx'
import { fixed, withUncertainty } from '../figures.ts'
import { edgeConvention } from './edge-words.ts'
import { edgesOf } from './logbook-rows.ts'
import { RungCells } from './rung-cells.tsx'
import { StrikeReading } from './strike-reading.tsx'

type Props = {
  view: BenchView | TypedBenchView
  reading: ReadingView
  /** The newest reading not struck: its beam still stands, so its fields are open without asking. */
  isCurrent: boolean
}

/** Where the row is a block, each value has its heading above it. */
const named =
  'stacked:p-0 stacked:text-left stacked:empty:hidden stacked:before:inline-block stacked:before:w-full stacked:before:text-[12.5px] stacked:before:text-ink-soft stacked:before:content-[attr(data-name)]'

const centimetres = (metres: number) => fixed(metres * 100, 2)

function againWords({ rung }: ReadingView, isMine: boolean, hasRungs: boolean): string {
  if (hasRungs) return rung ? 'choose again' : 'choose the rung'
  return isMine ? 'read again' : 'read the edges'
}

/** One reading: what was captured, the edges that this person read, what follows, and what others read. */
export function LogbookRow({ view, reading, isCurrent }: Props) {
  const id = useId()
  const { benchId, scale } = view.bench.config
  const fetcher = useFetcher<ActionReply>()
  const { mine, myPhoto, others, spreadMetres } = edgesOf(reading, view.person.id)
  const [isAsked, setAsked] = useState(false)
  const [left, setLeft] = useState('')
  const [right, setRight] = useState('')
  const [answered, setAnswered] = useState(fetcher.data)
  if (fetcher.data !== answered) {
    setAnswered(fetcher.data)
    if (fetcher.data?.ok) setAsked(false)
  }
  const isEntry = !reading.struck && (isAsked || (isCurrent && !reading.rung && !mine && !myPhoto))
  const errors = fetcher.data && !fetcher.data.ok ? fetcher.data.errors : {}
  const label = reading.number
  // On a real bench in a dark room the tube alone may glow.
  const beam = view.bench.config.picturePath === null ? 'text-beam dark:text-ink' : 'text-beam'

  function readAgain() {
    setLeft(mine ? centimetres(mine.leftMetres) : '')
    setRight(mine ? centimetres(mine.rightMetres) : '')
    setAsked(true)
  }
  const field = (name: 'left' | 'right', value: string, set: (text: string) => void) => (
    <>
      <input
        form={id}
        name={name}
        aria-label={`Reading ${label}, ${name} edge in cm`}
        placeholder={view.bench.config.tube.edges}
        inputMode="decimal"
        autoComplete="off"
        value={value}
        onChange={(event) => set(event.target.value)}
        aria-invalid={errors[name] ? true : undefined}
        aria-describedby={errors[name] ? `${id}-${name}` : undefined}
        className="min-h-8 w-20 border-ink px-2 text-right font-medium placeholder:font-normal placeholder:text-ink-soft stacked:w-full stacked:max-w-40 touch:min-h-12"
      />
      {errors[name] && (
        <span
          id={`${id}-${name}`}
          role="alert"
          className="block max-w-44 text-[12.5px] whitespace-normal text-trip stacked:max-w-full"
        >
          {errors[name].join(' ')}
        </span>
      )}
    </>
  )
  const diameter =
    reading.result?.diameterMetres ??
    reading.rung?.diameterMetres ??
    myPhoto?.diameterMetres ??
    (mine ? mine.rightMetres - mine.leftMetres : null)
  const cell = `px-2 py-1.5 ${named} ${reading.struck ? 'line-through' : ''}`
  return (
    <tr
      className={`border-b border-rule text-right whitespace-nowrap stacked:grid stacked:grid-cols-2 stacked:gap-x-3 stacked:gap-y-1.5 stacked:py-2 stacked:whitespace-normal ${reading.struck ? 'text-ink-soft' : ''}`}
      data-reading={reading.number}
    >
      <th
        scope="row"
        className={`py-1.5 pr-3 text-left font-normal stacked:col-span-2 stacked:p-0 stacked:font-medium stacked:before:content-['Reading_'] ${reading.struck ? 'line-through' : ''}`}
      >
        {label}
        {reading.polarity === -1 && <span className="text-ink-soft"> −B</span>}
      </th>
      <td className={cell} data-name="anode V">
        {withUncertainty(reading.anodeVolts, reading.uAnodeVolts)}
      </td>
      <td className={cell} data-name="coils A">
        {withUncertainty(reading.coilAmps, reading.uCoilAmps)}
      </td>
      {scale.kind === 'rungs' ? (
        <RungCells
          form={id}
          reading={reading}
          scale={scale}
          isEntry={isEntry}
          errors={errors}
          className={cell}
        />
      ) : (
        <>
          <td className={cell} data-name="left cm">
            {isEntry
              ? field('left', left, setLeft)
              : mine
                ? centimetres(mine.leftMetres)
                : myPhoto && 'photo'}
          </td>
          <td className={cell} data-name="right cm">
            {isEntry ? field('right', right, setRight) : mine && centimetres(mine.rightMetres)}
          </td>
        </>
      )}
      <td className={cell} data-name="d cm">
        {diameter !== null && centimetres(diameter)}
      </td>
      <td className={`${cell} ${reading.struck ? '' : beam}`} data-name="e/m 10¹¹ C/kg">
        {reading.result &&
          withUncertainty(reading.result.chargeToMass / 1e11, reading.result.standardUncertainty / 1e11)}
      </td>
      <td className="px-3 py-1.5 text-left whitespace-normal stacked:col-span-2 stacked:p-0">
        <div className="flex flex-wrap items-center gap-x-3 gap-y-1 text-ink-soft">
          {reading.source === 'typed' && <span>typed</span>}
          {isEntry && (
            <fetcher.Form
              id={id}
              method="post"
              action={href('/benches/:benchId/readings/:readingId/edges', { benchId, readingId: reading.id })}
              className="flex"
            >
              <button
                type="submit"
                disabled={fetcher.state !== 'idle'}
                className="button button-small whitespace-nowrap"
              >
                {scale.kind === 'rungs' ? 'Enter the rung' : 'Enter edges'}
              </button>
            </fetcher.Form>
          )}
          {isEntry && <span>{edgeConvention(view.bench.config)}</span>}
          {reading.struck && (
            <span>
              struck by {reading.struck.by}: {reading.struck.reason}
            </span>
          )}
          {others.length > 0 && <Others others={others} spreadMetres={spreadMetres} />}
          {!reading.struck && !isEntry && (
            <button type="button" onClick={readAgain} className="link-alone">
              {againWords(reading, mine !== null, scale.kind === 'rungs')}
              <span className="sr-only"> of reading {label}</span>
            </button>
          )}
          {scale.kind !== 'rungs' && (!reading.struck || reading.photos.length > 0) && (
            <Link to={photoPath({ benchId, readingId: reading.id })} className="link-alone">
              {reading.struck ? 'see the photo' : 'measure from a photo'}
              <span className="sr-only"> of reading {label}</span>
            </Link>
          )}
          {!reading.struck && (
            <StrikeReading
              action={href('/benches/:benchId/readings/:readingId/strike', {
                benchId,
                readingId: reading.id,
              })}
              readingId={reading.id}
              number={label}
            />
          )}
          <AnswerLine
            reply={fetcher.data?.ok ? undefined : fetcher.data}
            fields={['left', 'right', 'rung', 'halfWidth']}
          />
        </div>
      </td>
    </tr>
  )
}

type OthersProps = Pick<ReturnType<typeof edgesOf>, 'others' | 'spreadMetres'>

function Others({ others, spreadMetres }: OthersProps) {
  return (
    <span>
      {others
        .map((read) =>
          'diameterMetres' in read
            ? `${read.name}: ${centimetres(read.diameterMetres)} on a photo`
            : `${read.name}: ${centimetres(read.leftMetres)} to ${centimetres(read.rightMetres)}`,
        )
        .join('; ')}
      {spreadMetres !== null && `; diameters spread over ${fixed(spreadMetres * 1000, 1)} mm`}
    </span>
  )
}
