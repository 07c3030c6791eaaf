import { describe, expect, it } from 'vitest'
import { readBench } from '../../../app/engine/formats/bench/read-bench.ts'
import { readVectors } from '../../../app/engine/formats/vectors/read-vectors.ts'
import { simulateGood } from '../../../app/engine/simulate/good-machine.ts'
import { bitAt } from '../../../app/engine/simulate/pattern-set.ts'
import { createRandom } from '../../../app/engine/source/random.ts'
import { hasData, readData } from '../../helpers/data.ts'

function respond(text: string, patterns: string[]): string[] {
  const { circuit } = readBench({ name: 'c.bench', text }).value!
  const set = readVectors({ name: 'p', text: patterns.join('\n') }, circuit).value!
  const { one, zero } = simulateGood(circuit, set)
  return patterns.map((_, pattern) =>
    Array.from({ length: one.rows }, (_, row) =>
      bitAt(one, row, pattern) ? '1' : bitAt(zero, row, pattern) ? '0' : 'X',
    ).join(''),
  )
}

describe('the good machine', () => {
  // SOURCE: the strong three-valued logic of Kleene 1952, as in the gate primitives of IEEE 1364-2005, table 7.
  it.each([
    ['AND', '000', '01X', '0XX'],
    ['OR', '01X', '111', 'X1X'],
    ['XOR', '01X', '10X', 'XXX'],
  ])('%s follows the table of three values', (gate, ...rows) => {
    const values = ['0', '1', 'X']
    const text = `INPUT(a)\nINPUT(b)\nOUTPUT(y)\nOUTPUT(z)\ny = ${gate}(a, b)\nz = NOT(y)\n`
    const patterns = values.flatMap((a) => values.map((b) => a + b))
    const responses = respond(text, patterns)
    expect(responses.map((response) => response[0]).join('')).toBe(rows.join(''))
    expect(responses.map((response) => response[1]).join('')).toBe(
      rows.join('').replace(/[01]/g, (value) => (value === '0' ? '1' : '0')),
    )
  })

  it('answers with the outputs, then with what the flip-flops capture', () => {
    const text = 'INPUT(a)\nOUTPUT(q)\nq = DFF(n)\nn = NAND(a, q)\n'
    expect(respond(text, ['00', '01', '11', 'X1', 'X0'])).toEqual(['01', '11', '10', '1X', '01'])
  })

  // SOURCE: c6288 multiplies its first 16 inputs by its last 16, low bit first, its last two outputs swapped; the open
  // data's own notes; the products are computed by integer arithmetic.
  it.skipIf(!hasData)('multiplies with c6288', () => {
    const random = createRandom(3)
    const pairs = Array.from({ length: 100 }, () => [random.below(65536), random.below(65536)] as const)
    const bits = (value: number): string =>
      Array.from({ length: 16 }, (_, bit) => Math.floor(value / 2 ** bit) % 2).join('')
    const responses = respond(
      readData('circuits/iscas85/c6288.bench').text,
      pairs.map(([a, b]) => bits(a) + bits(b)),
    )
    const products = responses.map((response) => {
      const order = [...Array(30).keys(), 31, 30]
      return order.reduce((sum, output, bit) => sum + Number(response[output]) * 2 ** bit, 0)
    })
    expect(products).toEqual(pairs.map(([a, b]) => a * b))
  })
})
