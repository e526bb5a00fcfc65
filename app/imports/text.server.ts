import { ImportRefused } from './import-refused.ts'
import { largestCsvBytes, tooManyBytes } from './limits.ts'

/** Besides tab and ends of lines, text has none of these. */
// biome-ignore lint/suspicious/noControlCharactersInRegex: they are what is looked for
const controlCharacters = /[\u0000-\u0008\u000b\u000c\u000e-\u001f\u007f]/

/**
 * The text of a file, told by its content: UTF-8, UTF-16 with its mark, else Windows-1252, in which older spreadsheets
 * write. A mark at the beginning is left out.
 *
 * @throws ImportRefused where it is empty, too large or not text
 */
export function decodeText(bytes: Uint8Array): string {
  if (bytes.byteLength === 0) throw new ImportRefused('This file is empty.')
  if (bytes.byteLength > largestCsvBytes) throw new ImportRefused(tooManyBytes(bytes.byteLength))
  const text = decode(bytes)
  if (controlCharacters.test(text))
    throw new ImportRefused(
      'This is not a text file, whatever its name says. In a spreadsheet, save it as CSV and send that.',
    )
  if (text.trim() === '') throw new ImportRefused('This file is empty.')
  return text
}

function decode(bytes: Uint8Array): string {
  const [first, second] = bytes
  if (first === 0xff && second === 0xfe) return new TextDecoder('utf-16le').decode(bytes)
  if (first === 0xfe && second === 0xff) return new TextDecoder('utf-16be').decode(bytes)
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes)
  } catch {
    return new TextDecoder('windows-1252').decode(bytes)
  }
}
