import { describe, expect, it } from 'vitest'
import { readPatternCsv } from '../../../app/engine/formats/csv/read-pattern-csv.ts'
import { readBench } from '../../../app/engine/formats/bench/read-bench.ts'
import { readVectors } from '../../../app/engine/formats/vectors/read-vectors.ts'
import { joinPatternSets } from '../../../app/engine/simulate/pattern-set-builder.ts'
import { bitAt, type BitPlane, type PatternSet } from '../../../app/engine/simulate/pattern-set.ts'
import { buildLineIndex } from '../../../app/engine/source/line-index.ts'

const circuit = readBench({
  name: 'two.bench',
  text: 'INPUT(a)\nINPUT(b)\nOUTPUT(y)\ny = AND(a, q)\nq = DFF(b)\n',
}).value!.circuit

const vectors = (text: string) => readVectors({ name: 'p.vec', text }, circuit)
const csv = (text: string) => readPatternCsv({ name: 'p.csv', text }, circuit)

function rowsOf(plane: BitPlane, nPatterns: number): string[] {
  return Array.from({ length: plane.rows }, (_, row) =>
    Array.from({ length: nPatterns }, (_, pattern) => (bitAt(plane, row, pattern) ? 1 : 0)).join(''),
  )
}

function places(
  reading: { diagnostics: readonly { code: string; span: { start: number } }[] },
  text: string,
) {
  const index = buildLineIndex(text)
  return reading.diagnostics.map(({ code, span }) => {
    const { line, column } = index.placeOf(span.start)
    return `${code} ${line}:${column}`
  })
}

describe('a vectors file', () => {
  it('gives inputs, then flip-flops; expected outputs, then data; cycles; comments', () => {
    const set = vectors('# three\r\n10X LH @7\r\n\r\n011 XL # second\r\n111\n').value as PatternSet
    expect(set.nPatterns).toBe(3)
    expect(rowsOf(set.value, 3)).toEqual(['101', '011', '011'])
    expect(rowsOf(set.unknown!, 3)).toEqual(['000', '000', '100'])
    expect(rowsOf(set.expected!.care, 3)).toEqual(['100', '110'])
    expect(rowsOf(set.expected!.value, 3)).toEqual(['000', '100'])
    expect(rowsOf(set.observed!, 3)).toEqual(['101', '111'])
    expect([...set.cycles!]).toEqual([7, 0, 0])
    expect(set.bursts).toEqual([{ name: 'p.vec', first: 0, count: 3 }])
  })

  it.each(['\n', '\r\n'])(
    'reads long runs of plain lines as it reads lines one by one, ended by %j',
    (end) => {
      const characters = ['0', '1', 'X', 'x', '1', '0', '0']
      const lines = Array.from({ length: 300 }, (_, at) =>
        [0, 1, 2].map((row) => characters[(at * at + 3 * row + (at >> 3)) % (at < 100 ? 2 : 7)]).join(''),
      )
      const commented = lines.map((line, at) => (at % 97 === 40 ? `${line} # aside` : line))
      const set = vectors(commented.join(end) + end).value as PatternSet
      const rowsWhere = (isMeant: (character: string) => boolean): string[] =>
        [0, 1, 2].map((row) => lines.map((line) => (isMeant(line[row]) ? 1 : 0)).join(''))
      expect(set.nPatterns).toBe(300)
      expect(rowsOf(set.value, 300)).toEqual(rowsWhere((character) => character === '1'))
      expect(rowsOf(set.unknown!, 300)).toEqual(rowsWhere((character) => /x/i.test(character)))
    },
  )

  it('finds a broken line in the middle of plain ones', () => {
    const text = `${'101\n'.repeat(40)}1z1\n${'101\n'.repeat(40)}`
    expect(places(vectors(text), text)).toEqual(['unknown-character 41:2'])
    const short = `${'101\n'.repeat(40)}11\n${'101\n'.repeat(40)}`
    expect(places(vectors(short), short)).toEqual(['pattern-width 41:1'])
  })

  it('keeps one plane where no X occurs', () => {
    expect(vectors('101\n').value!.unknown).toBeNull()
  })

  it.each([
    ['10\n', 'pattern-width 1:1'],
    ['101\n1011\n', 'pattern-width 2:1'],
    ['101 LHH\n', 'pattern-width 1:5'],
    ['101\n1a1\n', 'unknown-character 2:2'],
    ['101 L?\n', 'unknown-character 1:6'],
    ['101 @\n', 'unknown-character 1:6'],
    ['101 @0\n', 'out-of-range 1:6'],
    ['101 LH X\n', 'unknown-character 1:8'],
    ['', 'empty-file 1:1'],
    ['# none\n', 'no-patterns 1:1'],
  ])('%j is refused as %s', (text, finding) => {
    const reading = vectors(text)
    expect(reading.value).toBeNull()
    expect(places(reading, text)).toEqual([finding])
  })

  it('tells how wide it is, how wide it should be, and that the flip-flops are missing', () => {
    expect(vectors('10\n').diagnostics[0]).toMatchObject({
      message: 'pattern 1 has 2 input characters; "two" takes 3 (2 primary inputs and 1 flip-flops)',
      hint: 'These are the primary inputs alone: add a character for each of the 1 flip-flops.',
    })
  })

  it('numbers every broken line as the pattern that it was meant to be', () => {
    const messages = vectors('101\n10\n111\n1\n').diagnostics.map(({ message }) => message.slice(0, 9))
    expect(messages).toEqual(['pattern 2', 'pattern 4'])
  })

  it('of one endless line is refused, not read for ever', () => {
    const started = performance.now()
    expect(vectors('1'.repeat(100_000_000)).diagnostics[0]!.code).toBe('pattern-width')
    expect(performance.now() - started).toBeLessThan(5000)
  })
})

describe('a CSV file of patterns', () => {
  it('gives the same set as vectors, whatever the order of its columns', () => {
    const text = 'q;expect y;b;cycles;a;expect q\nX;L;0;7;1;H\n1;X;1;;0;L\n1;;1;;1;\n'
    const fromVectors = vectors('10X LH @7\n011 XL\n111\n').value
    expect({ ...csv(text).value, bursts: null }).toEqual({ ...fromVectors, bursts: null })
  })

  it.each([
    ['', 'empty-file 1:1'],
    ['a,b,q\n', 'no-patterns 1:1'],
    ['a,b\n1,0\n', 'missing-signal 1:1'],
    ['a,b,q,w\n1,0,0,0\n', 'unknown-signal 1:7'],
    ['a,b,q,a\n1,0,0,0\n', 'duplicate-declaration 1:7'],
    ['a,b,q\n1,0\n', 'pattern-width 2:1'],
    ['a,b,q\n1,0,2\n', 'unknown-character 2:5'],
    ['a,b,q,cycles\n1,0,1,-3\n', 'out-of-range 2:7'],
  ])('%j is refused as %s', (text, finding) => {
    const reading = csv(text)
    expect(reading.value).toBeNull()
    expect(places(reading, text)).toEqual([finding])
  })
})

describe('joined pattern sets', () => {
  it('read as their files one after the other, across word and block borders', () => {
    const lines = Array.from({ length: 1100 }, (_, at) =>
      ((at * 2654435761) >>> 29).toString(2).padStart(3, '0'),
    )
    const parts = [lines.slice(0, 45), lines.slice(45, 700), lines.slice(700)]
    const joined = joinPatternSets(parts.map((part) => vectors(part.join('\n')).value!))
    const whole = vectors(lines.join('\n')).value!
    expect(joined.value).toEqual(whole.value)
    expect(joined.bursts.map(({ first, count }) => [first, count])).toEqual([
      [0, 45],
      [45, 655],
      [700, 400],
    ])
  })
})
