import { deflateSync } from 'node:zlib'
import sharp from 'sharp'

/** A picture of one colour with its upper left quarter in another, so that a turn of it can be told. */
export function quarteredPicture({ width = 400, height = 300 } = {}) {
  const corner = {
    create: { width: width / 2, height: height / 2, channels: 3, background: '#e03010' },
  } as const
  return sharp({ create: { width, height, channels: 3, background: '#1030c0' } }).composite([
    { input: corner, left: 0, top: 0 },
  ])
}

/** What a phone writes into a photo: where it was, when, with what, and which way up. */
export const phoneNotes = {
  IFD0: { Make: 'Maker of phones', Artist: 'Kofi Adeyemi', Copyright: 'not-to-be-kept' },
  IFD3: {
    GPSLatitudeRef: 'N',
    GPSLatitude: '51/1 30/1 0/1',
    GPSLongitudeRef: 'E',
    GPSLongitude: '0/1 7/1 0/1',
  },
}

/** A PNG (ISO/IEC 15948) of zeros that says of itself how large it is: small as a file, vast once it is unpacked. */
export function blankPng(width: number, height: number): Buffer {
  const header = Buffer.alloc(13)
  header.writeUInt32BE(width, 0)
  header.writeUInt32BE(height, 4)
  // One bit a pixel, grey.
  header.set([1, 0, 0, 0, 0], 8)
  const pixels = Buffer.alloc(height * (1 + Math.ceil(width / 8)))
  return Buffer.concat([
    Buffer.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]),
    chunk('IHDR', header),
    chunk('IDAT', deflateSync(pixels, { level: 9 })),
    chunk('IEND', Buffer.alloc(0)),
  ])
}

function chunk(type: string, content: Buffer): Buffer {
  const body = Buffer.concat([Buffer.from(type, 'latin1'), content])
  const around = Buffer.alloc(4)
  around.writeUInt32BE(content.length)
  const check = Buffer.alloc(4)
  check.writeUInt32BE(crc32(body))
  return Buffer.concat([around, body, check])
}

/** ISO/IEC 15948, annex D. */
function crc32(bytes: Buffer): number {
  let crc = 0xffffffff
  for (const byte of bytes) {
    crc ^= byte
    for (let bit = 0; bit < 8; bit++) crc = crc & 1 ? (crc >>> 1) ^ 0xedb88320 : crc >>> 1
  }
  return (crc ^ 0xffffffff) >>> 0
}
