import { createHash } from 'node:crypto'
import sharp from 'sharp'
import { describe, expect, it } from 'vitest'
import { takePicture } from '#app/files/picture.server.ts'
import { largestPhotoBytes } from '#app/files/picture-limits.ts'
import { blankPng, phoneNotes, quarteredPicture } from '#tests/support/pictures.ts'

const pixelAt = async (bytes: Uint8Array, left: number, top: number) => [
  ...(await sharp(bytes).extract({ left, top, width: 1, height: 1 }).raw().toBuffer()),
]
const isRed = ([red = 0, , blue = 0]: number[]) => red > blue

describe('A picture that is taken', () => {
  it.each([
    ['JPEG', () => quarteredPicture().jpeg().toBuffer()],
    ['PNG', () => quarteredPicture().png().toBuffer()],
    ['WebP', () => quarteredPicture().webp().toBuffer()],
  ])('from %s is JPEG, with its size and its digest', async (_, make) => {
    const { bytes, width, height, digest } = await takePicture(await make())
    expect((await sharp(bytes).metadata()).format).toBe('jpeg')
    expect([width, height]).toEqual([400, 300])
    expect(digest).toBe(createHash('sha256').update(bytes).digest('hex'))
    expect(isRed(await pixelAt(bytes, 50, 50))).toBe(true)
    expect(isRed(await pixelAt(bytes, 300, 250))).toBe(false)
  })

  it('has lost where, when and with what it was taken, and every other note', async () => {
    const sent = await quarteredPicture()
      .withExif(phoneNotes)
      .withXmp('<x:xmpmeta xmlns:x="adobe:ns:meta/"><p>not-to-be-kept</p></x:xmpmeta>')
      .withIccProfile('p3')
      .jpeg()
      .toBuffer()
    const before = await sharp(sent).metadata()
    expect([before.exif, before.xmp, before.icc].map((note) => note && note.length > 0)).toEqual([
      true,
      true,
      true,
    ])
    expect(sent.includes('not-to-be-kept')).toBe(true)

    const { bytes } = await takePicture(sent)
    const after = await sharp(bytes).metadata()
    expect([after.exif, after.xmp, after.icc, after.iptc, after.comments]).toEqual(Array(5).fill(undefined))
    const kept = Buffer.from(bytes)
    for (const word of ['Exif', 'GPS', 'http', 'Maker', 'Kofi', 'not-to-be-kept', 'ICC_PROFILE'])
      expect(kept.includes(word), word).toBe(false)
    // Of the segments for applications only the JFIF header, APP0, is left (ISO/IEC 10918-1, table B.1).
    expect(segmentsOf(kept).filter((marker) => marker > 0xe0 && marker <= 0xef)).toEqual([])
    expect(segmentsOf(kept)).not.toContain(0xfe)
  })

  it('stands upright, as its orientation says', async () => {
    // 6: turned a quarter to the left by the camera, so that what is up is at the right (Exif 2.32, orientation).
    const sent = await quarteredPicture().withMetadata({ orientation: 6 }).jpeg().toBuffer()
    const { bytes, width, height } = await takePicture(sent)
    expect([width, height]).toEqual([300, 400])
    expect(isRed(await pixelAt(bytes, 250, 50))).toBe(true)
    expect(isRed(await pixelAt(bytes, 50, 50))).toBe(false)
    expect((await sharp(bytes).metadata()).orientation).toBeUndefined()
  })

  it('is brought down to 3000 pixels on its longer side, in its proportions', async () => {
    const { width, height } = await takePicture(
      await quarteredPicture({ width: 4000, height: 1000 }).jpeg().toBuffer(),
    )
    expect([width, height]).toEqual([3000, 750])
  })

  it('has no holes: what was transparent is black', async () => {
    const sent = await sharp({ create: { width: 300, height: 300, channels: 4, background: '#ffffff00' } })
      .png()
      .toBuffer()
    expect(await pixelAt((await takePicture(sent)).bytes, 9, 9)).toEqual([0, 0, 0])
  })
})

describe('A picture that is refused', () => {
  const isRefused = async (sent: Uint8Array, words: string | RegExp) =>
    await expect(takePicture(sent)).rejects.toThrow(words)

  it.each([
    ['a text', async () => Buffer.from('no picture at all')],
    ['a page', async () => Buffer.from('<!DOCTYPE html><script>1</script>')],
    [
      'a drawing that can hold a script',
      async () =>
        Buffer.from('<svg xmlns="http://www.w3.org/2000/svg" width="300" height="300"><script/></svg>'),
    ],
    ['GIF', () => quarteredPicture().gif().toBuffer()],
    ['TIFF', () => quarteredPicture().tiff().toBuffer()],
    ['AVIF', () => quarteredPicture().avif().toBuffer()],
    ['nothing', async () => Buffer.alloc(0)],
  ])('is told by its content: %s', async (_, make) => {
    await isRefused(await make(), 'This is not a picture in JPEG, PNG or WebP')
  })

  it.each([
    ['a JPEG that ends early', async () => half(await quarteredPicture().jpeg().toBuffer())],
    [
      'a PNG that ends early',
      async () => half(await quarteredPicture().png({ compressionLevel: 0 }).toBuffer()),
    ],
    ['a JPEG of its first bytes alone', async () => Buffer.from([0xff, 0xd8, 0xff, 0xe0])],
    [
      'a drawing behind the first bytes of a PNG',
      async () =>
        Buffer.concat([(await quarteredPicture().png().toBuffer()).subarray(0, 8), Buffer.from('<svg/>')]),
    ],
  ])('is %s', async (_, make) => {
    await isRefused(await make(), 'cannot be read to its end')
  })

  it('has more pixels than a photo, though its file is small', async () => {
    const bomb = blankPng(20_000, 20_000)
    expect(bomb.byteLength).toBeLessThan(100_000)
    await isRefused(bomb, 'This picture has 400 million pixels. A photo may have 64 million')
    await isRefused(blankPng(8001, 8001), 'This picture has 64.1 million pixels.')
  })

  it('has too few pixels to be measured', async () => {
    await isRefused(
      await quarteredPicture({ width: 400, height: 198 }).png().toBuffer(),
      'This picture has 400 × 198 pixels. Each side needs at least 200 to be measured.',
    )
  })

  it('has too many bytes', async () => {
    const long = Buffer.concat([await quarteredPicture().jpeg().toBuffer(), Buffer.alloc(largestPhotoBytes)])
    await isRefused(long, 'This file has 16.1 million bytes. A photo may have 16 million')
  })

  it('leaves the next one alone', async () => {
    const good = await quarteredPicture().jpeg().toBuffer()
    const [bad, taken] = await Promise.allSettled([takePicture(half(good)), takePicture(good)])
    expect([bad.status, taken.status]).toEqual(['rejected', 'fulfilled'])
  })
})

const half = (bytes: Buffer) => bytes.subarray(0, bytes.length / 2)

/** The markers of a JPEG up to its first scan (ISO/IEC 10918-1, B.1.1.2). */
function segmentsOf(bytes: Buffer): number[] {
  const markers: number[] = []
  for (let at = 2; bytes[at] === 0xff; at += 2 + bytes.readUInt16BE(at + 2)) {
    const marker = bytes[at + 1] ?? 0
    markers.push(marker)
    if (marker === 0xda) break
  }
  return markers
}
