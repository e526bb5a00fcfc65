import { type Dispatch, useId } from 'react'
import type { PhotoMeasurement } from '#app/analysis/photo-measurement.ts'
import { FittedCircle } from './fitted-circle.tsx'
import { MarkButton, markElementId } from './mark-button.tsx'
import { type Marks, type MarksAction, nameOf } from './marks.ts'
import { useSight } from './use-sight.ts'
import { enlargement, heightOf, type Place, type Size } from './view-box.ts'

type Props = {
  photo: Size
  picture: string
  /** What is to be seen on it. */
  words: string
  marks: Marks
  dispatch: Dispatch<MarksAction>
  measurement: PhotoMeasurement | null
  /** Class of the colour of the beam's circle and points. */
  beam: string
  isFixed: boolean
}

/** An arrow key moves a mark by this part of what is seen, with Shift by a tenth of it. */
const nudgePart = 1 / 200
const zoomStep = 1.5

const arrows: Record<string, Place> = {
  ArrowLeft: { x: -1, y: 0 },
  ArrowRight: { x: 1, y: 0 },
  ArrowUp: { x: 0, y: -1 },
  ArrowDown: { x: 0, y: 1 },
}

/** The photo with its marks, to be enlarged, moved and marked by finger, mouse or keyboard. */
export function PhotoSight({ photo, picture, words, marks, dispatch, measurement, beam, isFixed }: Props) {
  const id = useId()
  const sight = useSight(photo, marks.all, dispatch)
  const { view } = sight
  const selected = marks.all.find((mark) => mark.id === marks.selectedId)
  const step = view.width * nudgePart
  const box = `${view.x} ${view.y} ${view.width} ${heightOf(view, photo)}`

  function nudge(markId: number, by: Place, isFine: boolean) {
    const size = isFine ? step / 10 : step
    dispatch({ do: 'nudge', id: markId, x: by.x * size, y: by.y * size })
    const mark = marks.all.find((it) => it.id === markId)
    if (mark) sight.show({ x: mark.x + by.x * size, y: mark.y + by.y * size })
  }
  function place(at: Place) {
    dispatch({ do: 'place', ...at })
    focusMark(id, marks.nextId)
  }
  function onKeyDown(event: React.KeyboardEvent, markId: number) {
    const by = arrows[event.key]
    if (event.ctrlKey || event.metaKey || event.altKey) return
    if (by && !isFixed) nudge(markId, by, event.shiftKey)
    else if (event.key === '+' || event.key === '=') zoom(zoomStep)
    else if (event.key === '-') zoom(1 / zoomStep)
    else if ((event.key === 'Delete' || event.key === 'Backspace') && !isFixed)
      dispatch({ do: 'remove', id: markId })
    else return
    event.preventDefault()
  }
  const zoom = (factor: number) => sight.zoomBy(factor, selected)

  return (
    <div className="grid min-w-0 gap-2">
      <div
        ref={sight.frame}
        role="application"
        aria-label="The photo with its marks"
        className="group relative w-full touch-none overflow-hidden rounded-md border border-rule bg-glass select-none"
        style={{ aspectRatio: `${photo.width} / ${photo.height}` }}
        onMouseDown={(event) => event.preventDefault()}
        onPointerDown={sight.onPointerDown}
        onPointerMove={sight.onPointerMove}
        onPointerUp={(event) => {
          const { placed, selectedId } = sight.endOf(event)
          if (placed && !isFixed) place(placed)
          else if (selectedId !== null) focusMark(id, selectedId)
        }}
        onPointerCancel={sight.endOf}
      >
        <svg
          viewBox={box}
          preserveAspectRatio="none"
          className="block size-full"
          role="img"
          aria-label={words}
        >
          <image
            href={picture}
            width={photo.width}
            height={photo.height}
            className="dark:brightness-45 group-focus-within:brightness-100 group-hover:brightness-100"
          />
        </svg>
        <div data-light="dark" className="on-photo absolute inset-0 text-ink">
          {measurement && (
            <svg viewBox={box} preserveAspectRatio="none" className="block size-full" aria-hidden="true">
              <FittedCircle marks={marks} measurement={measurement} beam={beam} />
            </svg>
          )}
          {marks.all.map((mark) => (
            <MarkButton
              key={mark.id}
              elementId={markElementId(id, mark.id)}
              mark={mark}
              name={nameOf(marks, mark)}
              left={(mark.x - view.x) / view.width}
              top={(mark.y - view.y) / heightOf(view, photo)}
              isSelected={mark.id === marks.selectedId}
              beam={beam}
              onSelect={() => {
                dispatch({ do: 'select', id: mark.id })
                sight.show(mark)
              }}
              onKeyDown={(event) => onKeyDown(event, mark.id)}
            />
          ))}
        </div>
      </div>
      <div className="flex flex-wrap items-center gap-2">
        {selected && !isFixed && (
          <NudgePad name={nameOf(marks, selected)} onNudge={(by) => nudge(selected.id, by, false)} />
        )}
        <button type="button" className="button button-small" onClick={() => zoom(1 / zoomStep)}>
          −<span className="sr-only">smaller</span>
        </button>
        <button type="button" className="button button-small" onClick={() => zoom(zoomStep)}>
          +<span className="sr-only">larger</span>
        </button>
        <button type="button" className="button button-small" onClick={sight.showAll}>
          Whole photo
        </button>
        <span className="text-ink-soft">{enlargement(view, photo).toFixed(1)} ×</span>
        {!isFixed && (
          <button type="button" className="button button-small ml-auto" onClick={() => place(sight.middle())}>
            Set one in the middle
          </button>
        )}
      </div>
    </div>
  )
}

const pad = [
  ['ArrowLeft', 'left', '←'],
  ['ArrowUp', 'up', '↑'],
  ['ArrowDown', 'down', '↓'],
  ['ArrowRight', 'right', '→'],
] as const

/** The arrow keys for a finger, which would hide the mark that it drags. */
function NudgePad({ name, onNudge }: { name: string; onNudge: (by: Place) => void }) {
  return (
    <fieldset aria-label={`Move ${name}`} className="flex gap-1">
      {pad.map(([key, word, sign]) => (
        <button
          key={key}
          type="button"
          onClick={() => onNudge(arrows[key] ?? { x: 0, y: 0 })}
          className="button button-small touch:min-w-12"
        >
          <span aria-hidden="true">{sign}</span>
          <span className="sr-only">
            move {name} {word}
          </span>
        </button>
      ))}
    </fieldset>
  )
}

/** After the mark has been drawn. */
function focusMark(id: string, markId: number) {
  requestAnimationFrame(() =>
    document.getElementById(markElementId(id, markId))?.focus({ preventScroll: true }),
  )
}
