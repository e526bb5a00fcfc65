import { type Dispatch, useEffect, useRef, useState } from 'react'
import type { Mark, MarksAction } from './marks.ts'
import {
  middleOf,
  type Place,
  type Size,
  shifted,
  showing,
  type ViewBox,
  wholePhoto,
  zoomed,
} from './view-box.ts'

/** Less than this is a tap, not a drag. */
const tapPixels = 6

type Gesture =
  | { kind: 'tap'; start: Place }
  | { kind: 'pan'; last: Place }
  | { kind: 'drag'; mark: Mark; start: Place; isMoved: boolean }
  | { kind: 'pinch'; distance: number; middle: Place }

const distanceOf = (a: Place, b: Place) => Math.hypot(a.x - b.x, a.y - b.y)
const betweenOf = (a: Place, b: Place): Place => ({ x: (a.x + b.x) / 2, y: (a.y + b.y) / 2 })

/** A place on the screen as one on the photo. */
function placeOf(client: Place, view: ViewBox, box: DOMRect): Place {
  const pixels = view.width / box.width
  return { x: view.x + (client.x - box.left) * pixels, y: view.y + (client.y - box.top) * pixels }
}

/**
 * What is seen of a photo, and what fingers, mouse and wheel do to it: a tap sets a mark, a drag moves the photo or the mark
 * under it, two fingers or Ctrl with the wheel enlarge.
 */
export function useSight(photo: Size, marks: readonly Mark[], dispatch: Dispatch<MarksAction>) {
  const frame = useRef<HTMLDivElement>(null)
  const [view, setView] = useState<ViewBox>(() => wholePhoto(photo))
  const pointers = useRef(new Map<number, Place>())
  const gesture = useRef<Gesture | null>(null)

  const boxOf = () => frame.current?.getBoundingClientRect() ?? new DOMRect(0, 0, 1, 1)

  function zoomBy(factor: number, at: Place = middleOf(view, photo)) {
    setView((now) => zoomed(now, photo, factor, at))
  }

  // React listens to the wheel passively, and then the page would be enlarged as well.
  useEffect(() => {
    const element = frame.current
    if (!element) return
    const onWheel = (event: WheelEvent) => {
      if (!event.ctrlKey && !event.metaKey) return
      event.preventDefault()
      const box = element.getBoundingClientRect()
      const client = { x: event.clientX, y: event.clientY }
      setView((now) => zoomed(now, photo, Math.exp(-event.deltaY / 300), placeOf(client, now, box)))
    }
    element.addEventListener('wheel', onWheel, { passive: false })
    return () => element.removeEventListener('wheel', onWheel)
  }, [photo])

  function onPointerDown(event: React.PointerEvent<HTMLDivElement>) {
    if (event.button !== 0) return
    const client = { x: event.clientX, y: event.clientY }
    pointers.current.set(event.pointerId, client)
    event.currentTarget.setPointerCapture(event.pointerId)
    const [first, second] = [...pointers.current.values()]
    if (first && second) {
      gesture.current = {
        kind: 'pinch',
        distance: distanceOf(first, second),
        middle: betweenOf(first, second),
      }
      return
    }
    const id = (event.target as Element).closest('[data-mark]')?.getAttribute('data-mark')
    const mark = marks.find((it) => String(it.id) === id)
    gesture.current = mark
      ? { kind: 'drag', mark, start: client, isMoved: false }
      : { kind: 'tap', start: client }
    if (mark) dispatch({ do: 'select', id: mark.id })
  }

  function onPointerMove(event: React.PointerEvent<HTMLDivElement>) {
    const now = gesture.current
    if (!now || !pointers.current.has(event.pointerId)) return
    const client = { x: event.clientX, y: event.clientY }
    pointers.current.set(event.pointerId, client)
    const box = boxOf()
    if (now.kind === 'pinch') {
      const [first, second] = [...pointers.current.values()]
      if (!first || !second) return
      const [distance, middle] = [distanceOf(first, second), betweenOf(first, second)]
      // From the view as it is by then: several moves may come before it is drawn.
      setView((old) => {
        const at = placeOf(now.middle, old, box)
        const larger = zoomed(old, photo, distance / Math.max(1, now.distance), at)
        const to = placeOf(middle, larger, box)
        return shifted(larger, photo, { x: at.x - to.x, y: at.y - to.y })
      })
      gesture.current = { kind: 'pinch', distance, middle }
    } else if (now.kind === 'pan') {
      setView((old) => {
        const [from, to] = [placeOf(client, old, box), placeOf(now.last, old, box)]
        return shifted(old, photo, { x: to.x - from.x, y: to.y - from.y })
      })
      gesture.current = { kind: 'pan', last: client }
    } else if (distanceOf(client, now.start) > tapPixels || (now.kind === 'drag' && now.isMoved)) {
      if (now.kind === 'tap') gesture.current = { kind: 'pan', last: client }
      else {
        gesture.current = { ...now, isMoved: true }
        // From where the mark was, so that a finger beside it does not make it jump.
        const pixels = view.width / box.width
        const x = now.mark.x + (client.x - now.start.x) * pixels
        const y = now.mark.y + (client.y - now.start.y) * pixels
        dispatch({ do: 'move', id: now.mark.id, x, y })
      }
    }
  }

  /** What a gesture came to: a place where a mark is wanted, or the mark that was held. */
  function endOf(event: React.PointerEvent<HTMLDivElement>): {
    placed: Place | null
    selectedId: number | null
  } {
    const now = gesture.current
    pointers.current.delete(event.pointerId)
    // The finger that is left after two does nothing until it is lifted too.
    gesture.current =
      pointers.current.size > 0 ? { kind: 'pinch', distance: 1, middle: { x: 0, y: 0 } } : null
    const isLifted = event.type === 'pointerup'
    const client = { x: event.clientX, y: event.clientY }
    return {
      placed: isLifted && now?.kind === 'tap' ? placeOf(client, view, boxOf()) : null,
      selectedId: isLifted && now?.kind === 'drag' ? now.mark.id : null,
    }
  }

  return {
    frame,
    view,
    zoomBy,
    showAll: () => setView(wholePhoto(photo)),
    show: (place: Place) => setView((now) => showing(now, photo, place)),
    middle: () => middleOf(view, photo),
    onPointerDown,
    onPointerMove,
    endOf,
  }
}
