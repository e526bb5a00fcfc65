import { describe, expect, it } from 'vitest'
import {
  changeMarks,
  type Marks,
  type MarksAction,
  nameOf,
  startMarks,
  typedMarks,
} from '#app/components/photo/marks.ts'
import {
  enlargement,
  heightOf,
  shifted,
  showing,
  wholePhoto,
  zoomed,
} from '#app/components/photo/view-box.ts'

const photo = { width: 3000, height: 2000 }
const change = changeMarks(photo)
const marksOf = (...actions: MarksAction[]): Marks => actions.reduce(change, startMarks(null))
const named = (marks: Marks) => marks.all.map((mark) => [nameOf(marks, mark), mark.x, mark.y])

describe('Marks', () => {
  it('begin with the scale, and are set where the photo is tapped', () => {
    const marks = marksOf(
      { do: 'place', x: 10, y: 20 },
      { do: 'set', placing: 'point' },
      { do: 'place', x: 30, y: 40 },
      { do: 'set', placing: 'scale' },
      { do: 'place', x: 50, y: 60 },
    )
    expect(named(marks)).toEqual([
      ['scale mark 1', 10, 20],
      ['beam point 1', 30, 40],
      ['scale mark 2', 50, 60],
    ])
    expect(marks.selectedId).toBe(3)
  })

  it('stay on the photo and on a hundredth of a pixel, however they are moved', () => {
    const place: MarksAction = { do: 'place', x: 10.123_456, y: 20 }
    expect(marksOf(place).all[0]).toMatchObject({ x: 10.12, y: 20 })
    expect(marksOf(place, { do: 'nudge', id: 1, x: -20, y: 0.004 }).all[0]).toMatchObject({ x: 0, y: 20 })
    expect(marksOf(place, { do: 'move', id: 1, x: 4000, y: 2500 }).all[0]).toMatchObject({ x: 3000, y: 2000 })
  })

  it('are counted on when one is removed, and a new one never takes its place', () => {
    const place: MarksAction = { do: 'place', x: 1, y: 1 }
    const marks = marksOf(place, place, { do: 'remove', id: 1 }, place)
    expect(marks.all.map(({ id }) => id)).toEqual([2, 3])
    expect(named(marks).map(([name]) => name)).toEqual(['scale mark 1', 'scale mark 2'])
    expect(marksOf(place, { do: 'remove', id: 1 }).selectedId).toBeNull()
  })

  it('are sent as they stand, with what was typed for the scale', () => {
    const marks = marksOf(
      { do: 'place', x: 10, y: 20 },
      { do: 'type', id: 1, centimetres: '3,5' },
      { do: 'set', placing: 'point' },
      { do: 'place', x: 30, y: 40 },
    )
    const typed = { scaleMarks: [{ x: 10, y: 20, centimetres: '3,5' }], points: [{ x: 30, y: 40 }] }
    expect(typedMarks(marks)).toEqual(typed)
    expect(typedMarks(startMarks(typed))).toEqual(typed)
  })
})

describe('The view of a photo', () => {
  const all = wholePhoto(photo)

  it('keeps the place under the finger where it is seen', () => {
    const view = zoomed(all, photo, 4, { x: 1000, y: 500 })
    expect(enlargement(view, photo)).toBe(4)
    const part = { x: (1000 - view.x) / view.width, y: (500 - view.y) / heightOf(view, photo) }
    expect(part).toEqual({ x: 1 / 3, y: 1 / 4 })
  })

  it('never shows what is beside the photo, nor more than forty times', () => {
    expect(zoomed(all, photo, 0.5, { x: 0, y: 0 })).toEqual(all)
    const corner = zoomed(all, photo, 2, { x: 3000, y: 2000 })
    expect(corner).toEqual({ x: 1500, y: 1000, width: 1500 })
    expect(shifted(corner, photo, { x: 100, y: 100 })).toEqual(corner)
    expect(enlargement(zoomed(all, photo, 1000, { x: 5, y: 5 }), photo)).toBe(40)
  })

  it('follows a mark that has been moved out of it', () => {
    const view = zoomed(all, photo, 10, { x: 0, y: 0 })
    expect(showing(view, photo, { x: 200, y: 100 })).toBe(view)
    expect(showing(view, photo, { x: 1500, y: 1000 })).toEqual({ x: 1350, y: 900, width: 300 })
  })
})
