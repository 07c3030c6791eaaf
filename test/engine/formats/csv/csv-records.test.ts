import { describe, expect, it } from 'vitest'
import { csvRecords, csvSeparator } from '../../../../app/engine/formats/csv/csv-records.ts'

function cells(text: string, separator = ','): string[][] {
  return Array.from(csvRecords(text, separator), ({ fields }) => fields.map((field) => field.text))
}

// Expected records: RFC 4180, section 2; comments and trimmed blanks are our own.
describe('csvRecords', () => {
  it.each([
    [
      'a,b\r\n1,2\r\n',
      [
        ['a', 'b'],
        ['1', '2'],
      ],
    ],
    [
      'a,b\n1,2',
      [
        ['a', 'b'],
        ['1', '2'],
      ],
    ],
    [
      '\ufeffa,b\r1,2',
      [
        ['a', 'b'],
        ['1', '2'],
      ],
    ],
    ['"a,b","c ""d""","e\nf"', [['a,b', 'c "d"', 'e\nf']]],
    [
      '# note\n\n a , b \n,\n',
      [
        ['a', 'b'],
        ['', ''],
      ],
    ],
    ['a,', [['a', '']]],
    ['', []],
  ])('cuts %j', (text, records) => {
    expect(cells(text)).toEqual(records)
  })

  it('keeps the place of each field', () => {
    const [record] = Array.from(csvRecords('x, "y,z"\n', ','))
    expect(record.fields.map(({ start, end }) => [start, end])).toEqual([
      [0, 1],
      [3, 8],
    ])
  })

  it('says where a quotation mark is never closed', () => {
    expect(Array.from(csvRecords('a,"b\nc', ','))[0].unclosedAt).toBe(2)
  })
})

it.each([
  ['a,b;c,d\n', ','],
  ['# a,b,c\na;b;c,d\n', ';'],
  ['a\tb\n', '\t'],
  ['a\n', ','],
])('csvSeparator of %j is %j', (text, separator) => {
  expect(csvSeparator(text)).toBe(separator)
})
