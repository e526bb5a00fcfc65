/** The part of a photo that is shown, in its pixels. It has the photo's own proportions. */
export type ViewBox = { x: number; y: number; width: number }
export type Size = { width: number; height: number }
export type Place = { x: number; y: number }

const mostEnlarged = 40

export const wholePhoto = (photo: Size): ViewBox => ({ x: 0, y: 0, width: photo.width })

export const heightOf = (view: ViewBox, photo: Size) => (view.width * photo.height) / photo.width

export const middleOf = (view: ViewBox, photo: Size): Place => ({
  x: view.x + view.width / 2,
  y: view.y + heightOf(view, photo) / 2,
})

/** The view enlarged by a factor, with one place of the photo staying where it is seen. */
export function zoomed(view: ViewBox, photo: Size, factor: number, at: Place): ViewBox {
  const width = Math.min(photo.width, Math.max(photo.width / mostEnlarged, view.width / factor))
  const ratio = width / view.width
  return inside({ x: at.x - (at.x - view.x) * ratio, y: at.y - (at.y - view.y) * ratio, width }, photo)
}

/** The view shifted over the photo, in its pixels. */
export const shifted = (view: ViewBox, photo: Size, by: Place): ViewBox =>
  inside({ ...view, x: view.x + by.x, y: view.y + by.y }, photo)

/** The view itself where it shows a place, else one with that place in its middle. */
export function showing(view: ViewBox, photo: Size, place: Place): ViewBox {
  const height = heightOf(view, photo)
  const isShown =
    place.x >= view.x && place.x <= view.x + view.width && place.y >= view.y && place.y <= view.y + height
  if (isShown) return view
  return inside({ ...view, x: place.x - view.width / 2, y: place.y - height / 2 }, photo)
}

/** How much the photo is enlarged: 1 where all of it is shown. */
export const enlargement = (view: ViewBox, photo: Size) => photo.width / view.width

function inside(view: ViewBox, photo: Size): ViewBox {
  const within = (at: number, longest: number) => Math.min(Math.max(0, longest), Math.max(0, at))
  return {
    ...view,
    x: within(view.x, photo.width - view.width),
    y: within(view.y, photo.height - heightOf(view, photo)),
  }
}
