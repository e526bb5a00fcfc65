import { createHash } from 'node:crypto'
import sharp from 'sharp'
import {
  keptPhotoSide,
  largestPhotoBytes,
  largestPhotoPixels,
  leastPhotoSide,
  tooManyBytes,
  tooManyPixels,
} from './picture-limits.ts'

/** A picture as it is kept: JPEG, upright, without metadata. */
export type Picture = { bytes: Uint8Array<ArrayBuffer>; width: number; height: number; digest: string }

/** What was sent is no picture that is kept; its message is the sentence for whoever sent it. */
export class PictureRefused extends Error {}

const longestDecodingSeconds = 20

/**
 * A new picture with the pixels of one that was sent: JPEG, PNG or WebP, told by its content whatever it is called.
 * Position, time, maker and all other metadata stay behind, the orientation is carried out, and a longer side than is kept
 * is brought down to that. No more pixels are decoded than a photo may have, whatever a small file claims to hold.
 *
 * @throws PictureRefused with the reason
 */
export function takePicture(sent: Uint8Array): Promise<Picture> {
  return inTurn(async () => {
    if (sent.byteLength > largestPhotoBytes) throw new PictureRefused(tooManyBytes(sent.byteLength))
    if (!isKnownType(sent))
      throw new PictureRefused(
        'This is not a picture in JPEG, PNG or WebP, whatever its name says. Send it as one of these.',
      )
    try {
      return await encode(sent)
    } catch (error) {
      if (error instanceof PictureRefused) throw error
      throw new PictureRefused('This picture cannot be read to its end: the file is damaged. Send it again.')
    }
  })
}

let before: Promise<unknown> = Promise.resolve()

/** One after another: a decoded picture fills some hundred megabytes. */
function inTurn<T>(work: () => Promise<T>): Promise<T> {
  const run = before.then(work)
  before = run.catch(() => {})
  return run
}

/** The first bytes of JPEG (ISO/IEC 10918-1, B.1.1.3), PNG (ISO/IEC 15948, 5.2) and WebP (RFC 9649, 2.4). */
function isKnownType(bytes: Uint8Array): boolean {
  const starts = (at: number, ...expected: number[]) => expected.every((byte, i) => byte === bytes[at + i])
  const isWebp = starts(0, 0x52, 0x49, 0x46, 0x46) && starts(8, 0x57, 0x45, 0x42, 0x50)
  return starts(0, 0xff, 0xd8, 0xff) || starts(0, 0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a) || isWebp
}

async function encode(sent: Uint8Array): Promise<Picture> {
  // The header alone, so that what is refused can be told how large it claims to be.
  const { width, height } = await sharp(sent, { limitInputPixels: false }).metadata()
  if (width * height > largestPhotoPixels) throw new PictureRefused(tooManyPixels(width * height))
  if (Math.min(width, height) < leastPhotoSide)
    throw new PictureRefused(
      `This picture has ${width} × ${height} pixels. Each side needs at least ${leastPhotoSide} to be measured.`,
    )
  const { data, info } = await sharp(sent, {
    limitInputPixels: largestPhotoPixels,
    failOn: 'error',
    sequentialRead: true,
  })
    .timeout({ seconds: longestDecodingSeconds })
    .autoOrient()
    .resize({ width: keptPhotoSide, height: keptPhotoSide, fit: 'inside', withoutEnlargement: true })
    .flatten({ background: '#000' })
    .jpeg({ quality: 90, chromaSubsampling: '4:4:4' })
    .toBuffer({ resolveWithObject: true })
  return {
    bytes: new Uint8Array(data),
    width: info.width,
    height: info.height,
    digest: createHash('sha256').update(data).digest('hex'),
  }
}
