import { expect, test } from 'vitest'
import { readWeights } from '../../../../app/engine/formats/weights/read-weights.ts'
import { buildLineIndex } from '../../../../app/engine/source/line-index.ts'

const read = (text: string) => readWeights({ name: 'weights.csv', text })

test('rows give a name and a weight, whatever the line ends, header or not', () => {
  const names = (text: string) => read(text).value?.map(({ name, weight }) => `${name}=${weight}`)
  expect(names('\ufefffault or block,weight\r\ncore/alu,2\r\n\r\n# spare\r\nG7>G10.1/0, .5\r\n')).toEqual([
    'core/alu=2',
    'G7>G10.1/0=0.5',
  ])
  expect(names('"a,b [3]",1e1\rx,0')).toEqual(['a,b [3]=10', 'x=0'])
})

test.each([
  ['', '1:1 empty-file: the file gives no weight / Write lines such as core/alu,2'],
  ['fault,weight\n', '1:1 empty-file: the file gives no weight / Write lines such as core/alu,2'],
  ['a,1\nb;2', '2:1 syntax: found "b;2" without a comma / Write a fault or a block, a comma, and its weight'],
  [
    'a,1\nb,two',
    '2:3 syntax: found "two" where a weight is expected / Write a number such as 2 or 0.5, with a decimal point',
  ],
  ['a,1\n,2', '2:1 syntax: the name before the comma is empty / Write a fault or a block before the comma'],
  ['a,-1', '1:3 out-of-range: the weight of "a" is -1 / Write a number from 0 to 1000000'],
  ['a,1\na,2', '2:1 duplicate-declaration: "a" is given a weight twice / Remove one of the lines'],
])('%j is refused with its place', (text, expected) => {
  const { value, diagnostics } = read(text)
  const [{ code, message, hint, span }] = diagnostics
  const { line, column } = buildLineIndex(text).placeOf(span.start)
  expect(value).toBeNull()
  expect(`${line}:${column} ${code}: ${message} / ${hint}`).toBe(expected)
})
