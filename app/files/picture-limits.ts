/** What a photo may have: a phone's has a few million bytes and some ten million pixels. */
export const largestPhotoBytes = 16_000_000
/** Half as much again is still read, so that a file that is a little too large is answered beside its field. */
export const largestUploadBytes = 1.5 * largestPhotoBytes
export const largestPhotoPixels = 64_000_000
/** A side shorter than this leaves too little to measure. */
export const leastPhotoSide = 200
/** The longer side as it is kept: a beam that fills half of it has a thousand pixels, a tenth of a millimetre and less. */
export const keptPhotoSide = 3000

export const photoTypes = ['image/jpeg', 'image/png', 'image/webp'] as const

/** Rounded up, so that what is over a limit is never said to be on it. */
const millions = (count: number) => Math.ceil(count / 100_000) / 10

/** Said by the page before a photo is sent, and by the server in any case. */
export const tooManyBytes = (bytes: number) =>
  `This file has ${millions(bytes)} million bytes. A photo may have ${millions(largestPhotoBytes)} million: send a smaller one.`
export const tooManyPixels = (pixels: number) =>
  `This picture has ${millions(pixels)} million pixels. A photo may have ${millions(largestPhotoPixels)} million: send a smaller one.`
