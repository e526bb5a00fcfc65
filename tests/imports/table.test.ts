import { describe, expect, it } from 'vitest'
import { ImportRefused } from '#app/imports/import-refused.ts'
import { largestColumns, largestCsvBytes, largestRows } from '#app/imports/limits.ts'
import { readTable } from '#app/imports/table.server.ts'
import { decodeText } from '#app/imports/text.server.ts'

const auto = { delimiter: null, decimal: null, headingRow: null }
const bytesOf = (text: string, encoding: BufferEncoding = 'utf8') =>
  new Uint8Array(Buffer.from(text, encoding))

describe('the text of a file', () => {
  it.each([
    ['UTF-8', bytesOf('V;d/cm µ')],
    ['UTF-8 with its mark', bytesOf('\ufeffV;d/cm µ')],
    ['UTF-16 with its mark', bytesOf('\ufeffV;d/cm µ', 'utf16le')],
    ['Windows-1252', bytesOf('V;d/cm µ', 'latin1')],
  ])('is read from %s', (_, bytes) => {
    expect(decodeText(bytes)).toBe('V;d/cm µ')
  })

  it.each([
    ['nothing', new Uint8Array(), 'empty'],
    ['blanks alone', bytesOf(' \n\t\r\n'), 'empty'],
    [
      'a PNG’s first bytes (ISO/IEC 15948, 5.2)',
      bytesOf('\x89PNG\r\n\x1a\n\0\0\0\rIHDR', 'latin1'),
      'not a text file',
    ],
    ['a ZIP’s, as a workbook’s are', bytesOf('PK\x03\x04\x14\0\x06\0', 'latin1'), 'not a text file'],
    ['one byte too many', new Uint8Array(largestCsvBytes + 1).fill(0x31), 'may have 256 thousand'],
  ])('is refused for %s', (_, bytes, words) => {
    expect(() => decodeText(bytes)).toThrow(ImportRefused)
    expect(() => decodeText(bytes)).toThrow(words)
  })
})

describe('the table of a text', () => {
  it.each([
    ['commas and points', 'V,I,d\n150,1.54,8.1\n165,1.50,8.7\n', 'comma', '.'],
    ['semicolons and commas', 'V;I;d\n150,0;1,54;8,1\n165,0;1,50;8,7\n', 'semicolon', ','],
    ['semicolons and points', 'V;I;d\n150.0;1.54;8.1\n165.0;1.50;8.7\n', 'semicolon', '.'],
    ['tabs and commas', 'V\tI\td\n150,0\t1,54\t8,1\n165,0\t1,50\t8,7\n', 'tab', ','],
    ['quoted commas', '"V","I","d"\n"150,0","1,54","8,1"\n"165,0","1,50","8,7"\n', 'comma', ','],
    ['ends of lines of another system', 'V;I;d\r\n150,0;1,54;8,1\r\n', 'semicolon', ','],
  ])('with %s is recognised', (_, text, delimiter, decimal) => {
    const table = readTable(text, auto)
    expect([table.delimiter, table.decimal]).toEqual([delimiter, decimal])
    expect(table.headings).toEqual(['V', 'I', 'd'])
    expect(table.rows[0]?.cells).toHaveLength(3)
  })

  it('begins below its headings, with words above them, and tells the line of each row', () => {
    const table = readTable('Practical, group B\n\nV,I,d\n150,1.54,8.1\n\n165,1.50,8.7\n', auto)
    expect(table.headings).toEqual(['V', 'I', 'd'])
    expect(table.rows.map(({ line }) => line)).toEqual([4, 6])
  })

  it('may have no headings', () => {
    const table = readTable('150,1.54,8.1\n165,1.50,8.7\n', auto)
    expect([table.headingRow, table.headings, table.rows.length]).toEqual([0, ['', '', ''], 2])
  })

  it('is read as a person says, where they know better', () => {
    const choice = { delimiter: 'comma', decimal: '.', headingRow: 2 } as const
    const table = readTable('a,b\n1,2\n3,4\n', choice)
    expect(table).toMatchObject({ headings: ['1', '2'], rows: [{ line: 3, cells: ['3', '4'] }] })
  })

  it('keeps rows that are short, and leaves out those that are empty', () => {
    const { rows } = readTable('V,I,d\n150,1.54\n,,\n165,1.5,8.7,9\n', auto)
    expect(rows.map(({ cells }) => cells)).toEqual([
      ['150', '1.54', '', ''],
      ['165', '1.5', '8.7', '9'],
    ])
  })

  it.each([
    [
      'more rows than can be imported',
      `V,I\n${'1,2\n'.repeat(largestRows + 1)}`,
      `${largestRows + 1} rows. At most ${largestRows}`,
    ],
    ['far more rows', `V,I\n${'1,2\n'.repeat(largestRows * 10)}`, 'more than'],
    ['too many columns', `${'1,'.repeat(largestColumns)}1\n`, `At most ${largestColumns}`],
    ['a quotation mark that is not closed', 'V,I\n"1,2\n3,4\n', 'not closed'],
  ])('is refused with %s', (_, text, words) => {
    expect(() => readTable(text, auto)).toThrow(ImportRefused)
    expect(() => readTable(text, auto)).toThrow(words)
  })

  it('takes as many rows as can be imported', () => {
    expect(readTable(`V,I\n${'1,2\n'.repeat(largestRows)}`, auto).rows).toHaveLength(largestRows)
  })
})
