import { expect, it } from 'vitest'
import { readBench } from '../../../app/engine/formats/bench/read-bench.ts'
import { readPatternCsv } from '../../../app/engine/formats/csv/read-pattern-csv.ts'
import { writePatternCsv } from '../../../app/engine/formats/csv/write-pattern-csv.ts'
import { readVectors } from '../../../app/engine/formats/vectors/read-vectors.ts'
import { writeVectors } from '../../../app/engine/formats/vectors/write-vectors.ts'
import { simulateGood } from '../../../app/engine/simulate/good-machine.ts'
import { emptyPlane } from '../../../app/engine/simulate/pattern-set.ts'

const TEXT = 'INPUT(a)\nINPUT(b)\nOUTPUT(y)\nOUTPUT(q)\nq = DFF(n)\nn = NAND(a, b)\ny = XOR(a, q)\n'
const { circuit } = readBench({ name: 'small.bench', text: TEXT }).value!
const vectors = '101 HHH @7\nX10 XLX\n000 LLH @3\n'
const patterns = readVectors({ name: 'small.vec', text: vectors }, circuit).value!

it('writes vectors in the chosen order as they were read', () => {
  const text = writeVectors({ patterns, circuit, sequence: [2, 0, 1] })
  expect(text.split('\n').filter((line) => !line.startsWith('#'))).toEqual([
    '000 LLH @3',
    '101 HHH @7',
    'X10 XLX',
    '',
  ])
})

it('writes the response where the set expects nothing', () => {
  const plain = { ...patterns, expected: null, cycles: null }
  const response = simulateGood(circuit, plain)
  const text = writeVectors({ patterns: plain, circuit, sequence: [0, 1], response })
  // By hand: a=1 b=0 q=1: y=0, n=1. a=X b=1 q=0: y=X, q=0, n=X.
  expect(text).toMatch(/\n101 LHH\nX10 XLX\n$/)
  expect(writeVectors({ patterns: plain, circuit, sequence: [0] })).toMatch(/\n101\n$/)
})

it('writes CSV that is read back as the same patterns', () => {
  const text = writePatternCsv({ patterns, circuit, sequence: [0, 1, 2] })
  expect(text.split('\r\n')[0]).toBe('a,b,q,expect y,expect q,cycles')
  const back = readPatternCsv({ name: 'small.csv', text }, circuit).value!
  expect(Array.from(back.cycles ?? [])).toEqual([7, 0, 3])
  // The flip-flop's data share a name with the output q, so that their expected values are left out.
  const sequence = [0, 1, 2]
  expect(writeVectors({ patterns: back, circuit, sequence }).replaceAll('\n', ' ')).toContain(
    '101 HHX @7 X10 XLX 000 LLX @3',
  )
})

it('keeps masks in plain formats: what is not observed is not observed when read back', () => {
  const observed = emptyPlane(3, 3)
  observed.words[0] = 0b101
  const text = writeVectors({ patterns: { ...patterns, observed }, circuit, sequence: [0, 1, 2] })
  const reread = readVectors({ name: 'masked', text }, circuit).value!
  expect([0, 1, 2].map((row) => reread.observed!.words[row * reread.observed!.wordsPerRow])).toEqual([
    0b101 & (patterns.expected?.care.words[0] ?? 0),
    0,
    0,
  ])
})
