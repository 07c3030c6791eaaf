import { describe, expect, test } from 'vitest'
import { evaluateFunction } from '../../../../app/engine/circuit/cell-function.ts'
import { isFault, parseFunction } from '../../../../app/engine/formats/liberty/boolean-function.ts'

const NAMES = ['A', 'B', 'C', 'D']
const variableOf = (name: string): number => NAMES.indexOf(name)

function truthTable(text: string): string {
  const result = parseFunction(text, variableOf)
  if (isFault(result)) throw new Error(result.message)
  let table = ''
  for (let bits = 0; bits < 16; bits++) table += evaluateFunction(result, (index) => (bits >> index) & 1)
  return table
}

/** The table of a JavaScript function of four bits, the independent side of each comparison. */
function tableOf(of: (a: number, b: number, c: number, d: number) => number): string {
  let table = ''
  for (let bits = 0; bits < 16; bits++)
    table += of(bits & 1, (bits >> 1) & 1, (bits >> 2) & 1, (bits >> 3) & 1) & 1
  return table
}

// SOURCE: the Liberty reference's operators: ' after and ! before invert; then ^, then & * or a space, then | +.
describe('Liberty functions', () => {
  test.each([
    ["A'", tableOf((a) => ~a)],
    ["!A' ", tableOf((a) => a)],
    ["(A*B)'", tableOf((a, b) => ~(a & b))],
    ['A S'.replace('S', "B'"), tableOf((a, b) => a & ~b)],
    ['A B + C D', tableOf((a, b, c, d) => (a & b) | (c & d))],
    ['A&B|C&D', tableOf((a, b, c, d) => (a & b) | (c & d))],
    ['A ^ B C', tableOf((a, b, c) => (a ^ b) & c)],
    ['A B ^ C', tableOf((a, b, c) => a & (b ^ c))],
    ['!A^B', tableOf((a, b) => ~a ^ b)],
    ['(A+B)(C+D)', tableOf((a, b, c, d) => (a | b) & (c | d))],
    ["((A')')'", tableOf((a) => ~a)],
    ['1 A + 0', tableOf((a) => a)],
    ['A && B || C', tableOf((a, b, c) => (a & b) | c)],
    ['~(A ^ B ^ C)', tableOf((a, b, c) => ~(a ^ b ^ c))],
  ])('%s', (text, table) => {
    expect(truthTable(text)).toBe(table)
  })

  test.each([
    ['A & E', 4, 'unknown-name'],
    ['A + ', 4, 'syntax'],
    ['(A', 2, 'syntax'],
    ['A)', 1, 'syntax'],
    ['', 0, 'syntax'],
    ['('.repeat(1000), 200, 'limit'],
  ])('%s is refused with its place', (text, at, kind) => {
    expect(parseFunction(text, variableOf)).toMatchObject({ kind, at })
  })
})
