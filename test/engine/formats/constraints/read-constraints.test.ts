import { describe, expect, test } from 'vitest'
import { readConstraints } from '../../../../app/engine/formats/constraints/read-constraints.ts'
import { buildLineIndex } from '../../../../app/engine/source/line-index.ts'

const read = (text: string) => readConstraints({ name: 'constraints.json', text }, 30)

test('numbers and ranges become pattern indices, and each entry one part', () => {
  const text = '{"keep": [3, "10-12"], "before": [["1-2", 5]], "together": [[7, "8 - 9"]], "first": [3]}'
  const { value } = read(text)
  expect(value?.constraints).toEqual({
    keep: [2, 9, 10, 11],
    leaveOut: [],
    together: [[6, 7, 8]],
    before: [
      [0, 4],
      [1, 4],
    ],
    first: [2],
  })
  expect(value?.parts).toEqual([
    { kind: 'keep', from: 0, to: 1, text: '3' },
    { kind: 'keep', from: 1, to: 4, text: '"10-12"' },
    { kind: 'together', from: 0, to: 1, text: '[7,"8 - 9"]' },
    { kind: 'before', from: 0, to: 2, text: '["1-2",5]' },
    { kind: 'first', from: 0, to: 1, text: '3' },
  ])
})

describe('a file that cannot be used is refused with its place', () => {
  test.each([
    [
      '{"keep": [31]}',
      '1:11 out-of-range: the set has no pattern 31 / Patterns are numbered from 1 to 30, in file order',
    ],
    [
      '{"keep": ["20-10"]}',
      '1:11 out-of-range: the range "20-10" ends before it begins / Patterns are numbered from 1 to 30, in file order',
    ],
    [
      '{"keep": ["a"]}',
      '1:11 syntax: found "a" where a pattern number or a range is expected / Write 7 or "10-20"',
    ],
    ['{"keep": [0]}', '1:11 out-of-range: value 1 of "keep" is 0; a whole number of 1 or more is expected'],
    [
      '{"leave": []}',
      '1:2 unknown-name: the constraints file has no "leave" / The names known here: keep, leaveOut, together, before, first',
    ],
    [
      '{"leaveout": []}',
      '1:2 unknown-name: the constraints file has no "leaveout" / Did you mean "leaveOut"?',
    ],
    [
      '{"before": [[1, 2, 3]]}',
      '1:13 out-of-range: value 1 of "before" has 3 values; a list of 2 is expected',
    ],
    [
      '{"keep": [4],\n "leaveOut": [1, "3-5"]}',
      '1:11 contradiction: pattern 4 is kept and left out / Remove it from one of the two',
    ],
    [
      '{"before": [[1, 2],\n ["2-3", 9],\n [9, 1]]}',
      '1:13 contradiction: these constraints go in a circle: 1 before 2, 2 before 9, 9 before 1 / Remove one of them',
    ],
  ])('%s', (text, expected) => {
    const { value, diagnostics } = read(text)
    const [{ code, message, hint, span }] = diagnostics
    const { line, column } = buildLineIndex(text).placeOf(span.start)
    expect(value).toBeNull()
    expect(`${line}:${column} ${code}: ${message}${hint === undefined ? '' : ` / ${hint}`}`).toBe(expected)
  })

  test('ranges that spell out too much are refused before they fill the memory', () => {
    const text = `{"keep": [${new Array(200).fill('"1-50000"').join()}]}`
    const { diagnostics } = readConstraints({ name: 'c.json', text }, 50_000)
    expect(diagnostics[0].code).toBe('limit')
  })
})
