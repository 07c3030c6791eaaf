import { describe, expect, it } from 'vitest'
import { readProgram } from '../../../../app/engine/formats/program/read-program.ts'

const HEADER = 'Burst,Kind,File,Patterns,Measured ms,Set-up ms,Must stay,Must be first\n'

function read(text: string) {
  return readProgram({ name: 'program.csv', text })
}

describe('readProgram', () => {
  it('reads every column', () => {
    const { value, diagnostics } = read(
      `${HEADER}continuity,pins,,,12.5,1,yes,x\ncore,scan,core.stil,172,,,no,\n`,
    )
    expect(diagnostics).toEqual([])
    expect(value).toEqual([
      {
        burst: 'continuity',
        kind: 'pins',
        file: '',
        patterns: null,
        measuredMs: 12.5,
        setupMs: 1,
        mustStay: true,
        mustBeFirst: true,
      },
      {
        burst: 'core',
        kind: 'scan',
        file: 'core.stil',
        patterns: 172,
        measuredMs: null,
        setupMs: null,
        mustStay: false,
        mustBeFirst: false,
      },
    ])
  })

  it('reads columns in any order, semicolons and decimal commas', () => {
    const { value } = read('measured_ms;burst\n12,5;"a;b"\n')
    expect(value).toMatchObject([{ burst: 'a;b', measuredMs: 12.5 }])
  })

  it.each([
    ['', 'empty-file', 0],
    [HEADER, 'empty-file', 0],
    ['kind,file\nscan,a\n', 'missing-signal', 0],
    ['burst,burst\na,b\n', 'duplicate-declaration', 6],
    ['burst,measured s\na,1\n', 'unknown-name', 6],
    ['burst,patterns\na,1.5\n', 'syntax', 17],
    ['burst,measured ms\na,-1\n', 'syntax', 20],
    ['burst,measured ms\na,1e12\n', 'out-of-range', 20],
    ['burst,must stay\na,perhaps\n', 'syntax', 18],
    ['burst,kind\na,b,c\n', 'width-mismatch', 15],
    ['burst,kind\n,b\n', 'missing-signal', 11],
    ['burst\na\na\n', 'duplicate-declaration', 8],
    ['burst,must be first\na,1\nb,1\n', 'duplicate-declaration', 26],
    ['burst\n"a\n', 'truncated', 6],
  ])('refuses %j with %s at %i', (text, code, start) => {
    const { value, diagnostics } = read(text)
    expect(value).toBeNull()
    expect(diagnostics[0]).toMatchObject({ code, severity: 'error', span: { start } })
  })
})
