import { describe, expect, it } from 'vitest'
import { formatDiagnostic, placeDiagnostics } from '../../../app/engine/source/caret-frame.ts'
import type { Diagnostic } from '../../../app/engine/source/diagnostic.ts'
import { buildLineIndex } from '../../../app/engine/source/line-index.ts'

function framed(text: string, start: number, end: number, more: Partial<Diagnostic> = {}): string {
  const finding: Diagnostic = {
    code: 'syntax',
    severity: 'error',
    file: 'f.v',
    span: { start, end },
    message: 'wrong',
    ...more,
  }
  return formatDiagnostic(placeDiagnostics([finding], [{ name: 'f.v', text }])[0]!)
}

describe('a caret frame', () => {
  it('shows the line before, the line, and carets under the span', () => {
    expect(framed('one\ntwo three\n', 8, 13)).toBe(
      'f.v:2:5 - error: wrong\n1 | one\n2 | two three\n  |     ^^^^^',
    )
  })

  it('is the same with CRLF and lone CR, and counts a tab as four columns', () => {
    expect(framed('one\r\n\ttwo\r\n', 6, 9)).toBe('f.v:2:2 - error: wrong\n1 | one\n2 |     two\n  |     ^^^')
    expect(framed('one\r\ttwo', 5, 8)).toBe('f.v:2:2 - error: wrong\n1 | one\n2 |     two\n  |     ^^^')
  })

  it('cuts a long line to a window around the place', () => {
    const text = 'x'.repeat(5000) + '!' + 'y'.repeat(5000)
    const [, line, carets] = framed(text, 5000, 5001).split('\n')
    expect(line!.length).toBeLessThan(110)
    expect(line![carets!.indexOf('^')]).toBe('!')
  })

  it('marks the first line of a span over several, and a place past the end', () => {
    expect(framed('ab\ncd\n', 1, 5).split('\n').at(-1)).toBe('  |  ^')
    expect(framed('ab', 2, 2).split('\n').at(-1)).toBe('  |   ^')
  })

  it('tells the second places that belong to the finding, and what to do', () => {
    const notes = [{ file: 'f.v', span: { start: 0, end: 2 }, message: 'first driven here' }]
    expect(framed('ab\ncd\n', 3, 5, { notes, hint: 'Remove one.' })).toMatch(
      /\n {2}f\.v:1:1 - first driven here\n {2}Remove one\.$/,
    )
  })

  it('survives control characters and a file without text', () => {
    expect(framed('a\u0000b', 1, 2)).toContain('a·b')
    expect(framed('', 0, 0)).toBe('f.v:1:1 - error: wrong')
  })
})

describe('a line index', () => {
  it('finds each place of a text with all kinds of line ends', () => {
    const index = buildLineIndex('a\nbb\r\nccc\rd')
    expect([0, 2, 3, 6, 9, 10].map((offset) => index.placeOf(offset))).toEqual([
      { line: 1, column: 1 },
      { line: 2, column: 1 },
      { line: 2, column: 2 },
      { line: 3, column: 1 },
      { line: 3, column: 4 },
      { line: 4, column: 1 },
    ])
  })
})
