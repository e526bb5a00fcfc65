import type { TypedMarks } from '#app/runs/photo-marks.ts'
import type { Place, Size } from './view-box.ts'

export type MarkKind = 'scale' | 'point'
export type Mark = Place & { id: number; kind: MarkKind; centimetres: string }

export type Marks = {
  all: Mark[]
  nextId: number
  selectedId: number | null
  /** What a tap on the photo sets. */
  placing: MarkKind
}

export type MarksAction =
  | ({ do: 'place' } & Place)
  | ({ do: 'move'; id: number } & Place)
  | ({ do: 'nudge'; id: number } & Place)
  | { do: 'select'; id: number | null }
  | { do: 'type'; id: number; centimetres: string }
  | { do: 'remove'; id: number }
  | { do: 'set'; placing: MarkKind }

/** The marks that a person saved last, or none: then the scale's come first. */
export function startMarks(saved: TypedMarks | null): Marks {
  const all = [
    ...(saved?.scaleMarks ?? []).map((mark) => ({ ...mark, kind: 'scale' as const })),
    ...(saved?.points ?? []).map((point) => ({ ...point, kind: 'point' as const, centimetres: '' })),
  ].map((mark, index) => ({ ...mark, id: index + 1 }))
  return { all, nextId: all.length + 1, selectedId: null, placing: saved ? 'point' : 'scale' }
}

/** What an action makes of the marks. They stay on the photo, and on a grid of a hundredth of its pixels. */
export function changeMarks(photo: Size): (marks: Marks, action: MarksAction) => Marks {
  const within = (at: number, side: number) => Math.min(side, Math.max(0, Math.round(at * 100) / 100))
  const inside = ({ x, y }: Place): Place => ({ x: within(x, photo.width), y: within(y, photo.height) })
  return (marks, action) => {
    const change = (id: number, of: (mark: Mark) => Partial<Mark>): Marks => ({
      ...marks,
      all: marks.all.map((mark) => (mark.id === id ? { ...mark, ...of(mark) } : mark)),
    })
    switch (action.do) {
      case 'place': {
        const mark = { id: marks.nextId, kind: marks.placing, centimetres: '', ...inside(action) }
        return { ...marks, all: [...marks.all, mark], nextId: mark.id + 1, selectedId: mark.id }
      }
      case 'move':
        return change(action.id, () => inside(action))
      case 'nudge':
        return change(action.id, ({ x, y }) => inside({ x: x + action.x, y: y + action.y }))
      case 'select':
        return { ...marks, selectedId: action.id }
      case 'type':
        return change(action.id, () => ({ centimetres: action.centimetres }))
      case 'remove':
        return {
          ...marks,
          all: marks.all.filter(({ id }) => id !== action.id),
          selectedId: marks.selectedId === action.id ? null : marks.selectedId,
        }
      case 'set':
        return { ...marks, placing: action.placing }
    }
  }
}

export const ofKind = ({ all }: Marks, kind: MarkKind) => all.filter((mark) => mark.kind === kind)

/** As they are sent to be saved. */
export function typedMarks(marks: Marks): TypedMarks {
  return {
    scaleMarks: ofKind(marks, 'scale').map(({ x, y, centimetres }) => ({ x, y, centimetres })),
    points: ofKind(marks, 'point').map(({ x, y }) => ({ x, y })),
  }
}

/** 'scale mark 2', 'beam point 5': counted among its kind. */
export function nameOf(marks: Marks, mark: Mark): string {
  const number = ofKind(marks, mark.kind).findIndex(({ id }) => id === mark.id) + 1
  return mark.kind === 'scale' ? `scale mark ${number}` : `beam point ${number}`
}
