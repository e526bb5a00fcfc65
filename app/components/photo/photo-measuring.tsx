import { useMemo, useReducer } from 'react'
import { href, useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import { doubts, type Measured, measureMarks } from '#app/runs/photo-marks.ts'
import type { PhotoView } from '#app/runs/photo-view.server.ts'
import { AnswerLine } from '../answer-line.tsx'
import { fixed, thinSpace, withUncertainty } from '../figures.ts'
import { residualsDrawn } from './fitted-circle.tsx'
import { BeamPoints, ScaleMarks } from './mark-lists.tsx'
import { changeMarks, type MarkKind, type Marks, type MarksAction, startMarks, typedMarks } from './marks.ts'
import { PhotoSight } from './photo-sight.tsx'

type Props = { view: PhotoView; photo: NonNullable<PhotoView['photo']> }

const edgeWords = {
  outer: 'the outer edge of the beam',
  inner: 'the inner edge of the beam',
  middle: 'the middle of the beam',
}

/** One photo with its marks, and the diameter that they give at once; saving stores both. */
export function PhotoMeasuring({ view, photo }: Props) {
  const { bench, reading, scale } = view
  const { width, height } = photo
  const size = useMemo(() => ({ width, height }), [width, height])
  const [marks, dispatch] = useReducer(changeMarks(size), view.saved, startMarks)
  const typed = useMemo(() => typedMarks(marks), [marks])
  const { measured, sentence } = useMemo(
    () => measureMarks(typed, { photo: size, scale }),
    [typed, size, scale],
  )
  const fetcher = useFetcher<ActionReply>()
  const isFixed = reading.struck !== null
  // On a real bench in a dark room the tube alone may glow.
  const beam = view.isVirtual ? 'text-beam' : 'text-beam in-[html[data-light=dark]]:text-ink'
  const ids = { benchId: bench.id, readingId: reading.id, photoId: photo.id }
  const lists = { marks, dispatch, measurement: measured?.measurement ?? null, isFixed }

  return (
    <div
      className="grid grid-cols-[minmax(0,var(--photo))] gap-x-8 gap-y-5 lg:grid-cols-[minmax(0,var(--photo))_minmax(20rem,26rem)]"
      style={{ '--photo': `calc(78dvh * ${width / height})` } as React.CSSProperties}
    >
      <div className="grid min-w-0 content-start gap-2">
        {!isFixed && <Placing marks={marks} dispatch={dispatch} words={edgeWords[view.edges]} />}
        <PhotoSight
          photo={size}
          picture={href('/benches/:benchId/readings/:readingId/photos/:photoId', ids)}
          words={`Photo of the beam of reading ${reading.number} with its scale`}
          marks={marks}
          dispatch={dispatch}
          measurement={lists.measurement}
          beam={beam}
          isFixed={isFixed}
        />
      </div>
      <div className="grid min-w-0 content-start gap-5">
        <noscript>Marks are set by a script of this page, which this browser does not run.</noscript>
        <section aria-label="Diameter" className="grid gap-2">
          {measured ? (
            <Diameter view={view} measured={measured} />
          ) : (
            <p className="font-medium">{sentence}</p>
          )}
          {!isFixed && (
            <fetcher.Form
              method="post"
              action={href('/benches/:benchId/readings/:readingId/photos/:photoId/measurements', ids)}
            >
              <input type="hidden" name="marks" value={JSON.stringify(typed)} />
              <button
                type="submit"
                disabled={!measured || fetcher.state !== 'idle'}
                className="button button-main"
              >
                Save the diameter
              </button>
            </fetcher.Form>
          )}
          <AnswerLine reply={fetcher.data} />
        </section>
        <ScaleMarks {...lists} scale={scale} />
        <BeamPoints {...lists} />
      </div>
    </div>
  )
}

type PlacingProps = { marks: Marks; dispatch: React.Dispatch<MarksAction>; words: string }

/** What a tap on the photo sets, and how marks are moved. */
function Placing({ marks, dispatch, words }: PlacingProps) {
  const choice = (kind: MarkKind, label: string) => (
    <label className="flex cursor-pointer items-center gap-2 touch:min-h-12">
      <input
        type="radio"
        name="placing"
        checked={marks.placing === kind}
        onChange={() => dispatch({ do: 'set', placing: kind })}
        className="size-4 appearance-none rounded-full border border-edge bg-surface checked:border-5 checked:border-ink"
      />
      {label}
    </label>
  )
  return (
    <div className="grid gap-1">
      <fieldset className="flex flex-wrap items-center gap-x-5">
        <legend className="float-left mr-5 contents font-medium">A tap sets</legend>
        {choice('scale', 'a scale mark')}
        {choice('point', 'a beam point')}
      </fieldset>
      <p className="max-w-[75ch] text-[12.5px] text-ink-soft">
        {marks.placing === 'scale'
          ? 'Mark two or more lines of the scale, far apart, and type what each reads.'
          : `Mark points along ${words}, all around it.`}{' '}
        Drag a mark to move it, or the photo beside it; two fingers, or Ctrl with the wheel, enlarge.{' '}
        <span className="touch:hidden">
          Arrow keys move the chosen mark, with Shift finely; + and − enlarge, Delete removes.
        </span>
      </p>
    </div>
  )
}

function Diameter({ view, measured }: { view: PhotoView; measured: Measured }) {
  const { measurement } = measured
  const { diameterMetres, uDiameterMetres, uCircleMetres, uScaleMetres } = measurement
  const toBeam = view.parallax * 100
  return (
    <>
      <p className="text-[22px] leading-tight font-bold whitespace-nowrap">
        d = {withUncertainty(diameterMetres * toBeam, uDiameterMetres * toBeam)}
        {thinSpace}cm
      </p>
      <p className="text-ink-soft">
        The circle gives {millimetres(uCircleMetres * view.parallax)} of its uncertainty, the scale{' '}
        {millimetres(uScaleMetres * view.parallax)}.
        {view.parallax !== 1 &&
          ` Parallax is taken out: × ${fixed(view.parallax, 3)}, from ${fixed(diameterMetres * 100, 2)} cm on the scale.`}{' '}
        Strokes at the circle show by how much a point lies off it, {residualsDrawn} times as long.
      </p>
      {doubts(measured, view.scale).map((doubt) => (
        <p key={doubt} className="hatch border-l-4 border-caution py-1 pl-3 font-medium">
          {doubt}
        </p>
      ))}
    </>
  )
}

const millimetres = (metres: number) => `${fixed(metres * 1000, 2)} mm`
