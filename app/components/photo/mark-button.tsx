import type { Mark } from './marks.ts'

type Props = {
  elementId: string
  mark: Mark
  name: string
  /** Where it is seen, as parts of the frame. */
  left: number
  top: number
  isSelected: boolean
  beam: string
  onSelect: () => void
  onKeyDown: (event: React.KeyboardEvent) => void
}

export const markElementId = (id: string, markId: number) => `${id}-mark-${markId}`

/** Four strokes that leave the place itself free to be seen. */
const strokes = 'M12 0.5v8.5M12 15v8.5M0.5 12h8.5M15 12h8.5'

/** One mark on the photo: a square cross with its number on a line of the scale, a ring on the beam. */
export function MarkButton(props: Props) {
  const { elementId, mark, name, left, top, isSelected, beam, onSelect, onKeyDown } = props
  const isScale = mark.kind === 'scale'
  const colour = isScale ? 'text-ink' : beam
  return (
    <button
      type="button"
      id={elementId}
      data-mark={mark.id}
      aria-label={name}
      aria-pressed={isSelected}
      aria-keyshortcuts="ArrowLeft ArrowRight ArrowUp ArrowDown Delete"
      onFocus={onSelect}
      onKeyDown={onKeyDown}
      className={`absolute size-6 -translate-1/2 cursor-grab ${colour} ${isSelected ? 'z-10' : ''}`}
      style={{ left: `${left * 100}%`, top: `${top * 100}%` }}
    >
      <svg viewBox="0 0 24 24" fill="none" stroke="currentColor" className="size-full" aria-hidden="true">
        {/* A dark or light seam, since a photo may be of any brightness. */}
        <g className="stroke-ground" strokeWidth="4">
          {isScale || isSelected ? <path d={strokes} /> : null}
          {!isScale && <circle cx="12" cy="12" r="5" />}
        </g>
        <g strokeWidth="1.6">
          {isScale || isSelected ? <path d={strokes} /> : null}
          {!isScale && <circle cx="12" cy="12" r="5" />}
        </g>
      </svg>
      {isScale && mark.centimetres !== '' && (
        <span
          aria-hidden="true"
          className="absolute top-full left-1/2 -translate-x-1/2 rounded-sm bg-ground px-1 text-[12px] font-medium whitespace-nowrap text-ink"
        >
          {mark.centimetres.slice(0, 8)}
        </span>
      )}
    </button>
  )
}
