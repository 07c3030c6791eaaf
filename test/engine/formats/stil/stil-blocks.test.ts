import { describe, expect, it } from 'vitest'
import { readBlocks } from '../../../../app/engine/formats/stil/read-blocks.ts'
import { SignalNames, busBits } from '../../../../app/engine/formats/stil/signal-names.ts'
import { StilFindings } from '../../../../app/engine/formats/stil/stil-findings.ts'
import { readStil, surveyStil } from '../../../../app/engine/formats/stil/read-stil.ts'
import { evaluateTime } from '../../../../app/engine/formats/stil/time-expression.ts'
import { smallScanDesign, smallStil } from './small-scan-design.ts'

// What each construct means: IEEE 1450-1999; the clause, from memory, stands with the test.

function survey(text: string) {
  return surveyStil({ name: 'blocks.stil', text: `STIL 1.0;\n${text}` })
}

describe('signals and groups (clauses 14 and 15)', () => {
  const text = `STIL 1.0; Signals { A In; B In; "d"[3..0] Out; "x.y" InOut; } SignalGroups {
    sum = 'A + B'; less = '(sum + d[3..0]) - B'; d2 = 'd[2..1]'; bit = 'd[3]'; whole = 'd'; odd = '"x.y" + sum'; }
    SignalGroups other { sum = 'B'; }`
  const findings = new StilFindings()
  const source = { name: 'x', text }
  const file = readBlocks(source, () => null, findings)
  const names = new SignalNames(file, findings)
  const members = (name: string): string[] =>
    Array.from(
      names.find(name, { source, span: { start: 0, end: 1 } }),
      (signal) => file.signals.names[signal] ?? '',
    )

  it.each([
    ['sum', ['A', 'B']],
    ['less', ['A', 'd[3]', 'd[2]', 'd[1]', 'd[0]']],
    ['d2', ['d[2]', 'd[1]']],
    ['bit', ['d[3]']],
    ['whole', ['d[3]', 'd[2]', 'd[1]', 'd[0]']],
    ['odd', ['x.y', 'A', 'B']],
    ['other::sum', ['B']],
    ['A', ['A']],
  ])('%s stands for %j', (name, expected) => {
    expect(findings.finish()).toEqual([])
    expect(members(name)).toEqual(expected)
  })

  it('lets the groups of a domain hide those without one', () => {
    names.useDomain('other')
    expect(members('sum')).toEqual(['B'])
    names.useDomain('')
    expect(members('sum')).toEqual(['A', 'B'])
  })

  it.each([
    ['a[2..0]', ['a[2]', 'a[1]', 'a[0]']],
    ['a[0..1]', ['a[0]', 'a[1]']],
    ['a[3]', null],
    ['a[0..99999999]', null],
  ])('busBits of %s', (name, bits) => {
    expect(busBits(name)).toEqual(bits)
  })

  it('refuses groups that grow beyond all measure', () => {
    const doubling = Array.from({ length: 40 }, (_, at) => `g${at + 1} = 'g${at} + g${at}';`).join(' ')
    const { diagnostics } = survey(
      `Signals { A In; } SignalGroups { g0 = 'A'; ${doubling} } Pattern p { V { g40=0; } }`,
    )
    expect(diagnostics.filter(({ severity }) => severity === 'error')).toMatchObject([{ code: 'limit' }])
  })
})

describe('time expressions (clause 6.13)', () => {
  const specs = new Map([
    ['tp', '100ns'],
    ['half', 'tp / 2'],
    ['round', 'round'],
  ])

  it.each([
    ['50ns', 50e-9],
    ['1.5us + 2 * 10ns', 1.52e-6],
    ['@+5ns', 25e-9],
    ['half - (tp/4)', 25e-9],
    ['-3ps', -3e-12],
    ['round', NaN],
    ['unknown', NaN],
    ['5 parsecs', NaN],
    ['(1ns', NaN],
  ])('%s', (text, seconds) => {
    const found = evaluateTime(text, specs, 20e-9)
    if (Number.isNaN(seconds)) expect(found).toBeNaN()
    else expect(found).toBeCloseTo(seconds, 15)
  })
})

describe('timing (clause 18)', () => {
  const pattern = 'Call load { SI=100; } Call capture { pi=10; po=LH; } Call load { SO=LHH; }'
  const design = smallScanDesign()

  it('inherits waveform tables, and takes events that hold for all characters of a list', () => {
    const inheriting = smallStil(pattern).replace(
      'WaveformTable t {',
      `WaveformTable pins { Waveforms { 'SE + SI + A + B' { 01 { 'tp/10' D/U; } } } }
       WaveformTable t { InheritWaveformTable pins;`,
    )
    const { value, diagnostics } = readStil({ name: 'x', text: inheriting }, design)
    expect(diagnostics).toEqual([])
    expect(value?.report.expects).toMatchObject({ outputs: 2, unloads: 3 })
  })

  it('orders a strobe and a clock edge by the variables of a Spec block', () => {
    const waveforms = `CK { 01P { '0ns' D/U/D; 'edge' D/U/U; 'edge + 10ns' D/U/D; } }
      'SE + SI + A + B' { 01 { '0ns' D/U; } } outs { LHX { 'look' L/H/X; } }`
    const unusedWith = (spec: string) => {
      const text = smallStil(pattern, { waveforms, before: `Spec s { Category c { ${spec} } }` })
      return readStil({ name: 'x', text }, design).value?.report.expects.unusedAfterCapture
    }
    expect(unusedWith("edge = '50ns'; look = '20ns';")).toBe(0)
    expect(unusedWith("edge { Min '10ns'; Typ '20ns'; } look = 'edge + 1ns';")).toBe(2)
  })

  it('takes a clock that rests high by the level it returns to', () => {
    const waveforms = `CK { 01P { '0ns' D/U/U; '50ns' D/U/D; '80ns' D/U/U; } }
      'SE + SI + A + B' { 01 { '0ns' D/U; } } outs { LHX { '40ns' L/H/X; } }`
    const text = smallStil(pattern, { waveforms }).replaceAll('CK=0', 'CK=1')
    expect(readStil({ name: 'x', text }, design).value?.report.testPins[0]).toMatchObject({
      name: 'CK',
      value: 1,
    })
  })

  it('takes the customary characters where the file has no timing, with a strobe before the clock', () => {
    const text = smallStil(pattern)
      .replace(/^Timing.*\n(.*\n)*?ScanStructures/m, 'ScanStructures')
      .replaceAll('W t;', '')
    expect(text).not.toContain('Waveform')
    const testPins = [{ name: 'CK', role: 'clock', value: 0, from: 'user' }] as const
    const { value, diagnostics } = readStil({ name: 'x', text }, smallScanDesign({ testPins }))
    expect(diagnostics).toEqual([])
    expect(value?.report.expects).toMatchObject({ outputs: 2, unloads: 3, unusedAfterCapture: 0 })
  })

  it('names an event list that fits no character list', () => {
    const text = smallStil(pattern).replace('D/U/N/Z', 'D/U/N')
    const { diagnostics } = readStil({ name: 'x', text }, design)
    expect(diagnostics[0]).toMatchObject({ code: 'width-mismatch', span: { start: text.indexOf('01NZ') } })
  })
})

describe('bursts (clauses 16 and 17)', () => {
  const pins = 'Signals { A In; Y Out; }'
  const vector = '{ V { A=1; Y=H; } }'

  it('reads the patterns of nested bursts in their order, a burst each', () => {
    const { value } = survey(`${pins} PatternExec { PatternBurst all; }
      PatternBurst all { PatList { first; inner; } } PatternBurst inner { PatList { second { } second; } }
      Pattern first ${vector} Pattern second { V { A=1; Y=H; } V { A=0; Y=L; } }`)
    expect(value?.bursts).toEqual([
      { name: 'all', first: 0, count: 1, onceCycles: 0 },
      { name: 'inner', first: 1, count: 4, onceCycles: 0 },
    ])
  })

  it('reads the first of several PatternExecs, and says so', () => {
    const { value, diagnostics } =
      survey(`${pins} PatternExec one { PatternBurst a; } PatternExec two { PatternBurst b; }
      PatternBurst a { PatList { p; } } PatternBurst b { PatList { p; p; } } Pattern p ${vector}`)
    expect(value?.report.patterns).toBe(1)
    expect(diagnostics).toMatchObject([{ code: 'ignored', severity: 'warning' }])
  })

  it('reads all patterns where no PatternExec names a burst, and says so', () => {
    const { value, diagnostics } = survey(`${pins} Pattern p ${vector} Pattern q ${vector}`)
    expect(value?.report.patterns).toBe(2)
    expect(diagnostics).toMatchObject([{ severity: 'warning' }])
  })

  it.each([
    ['a burst that is not there', 'PatternExec { PatternBurst b; }', 'unknown-name'],
    ['a burst within itself', 'PatternExec { PatternBurst b; } PatternBurst b { PatList { b; } }', 'limit'],
    [
      'patterns side by side',
      'PatternExec { PatternBurst b; } PatternBurst b { ParallelPatList { p; } }',
      'unsupported-construct',
    ],
    [
      'a timing that is not there',
      'PatternExec { Timing t; PatternBurst b; } PatternBurst b { PatList { p; } }',
      'unknown-name',
    ],
  ])('refuses %s', (_, blocks, code) => {
    const { value, diagnostics } = survey(`${pins} ${blocks} Pattern p ${vector}`)
    expect(value).toBeNull()
    expect(diagnostics.filter(({ severity }) => severity === 'error')).toMatchObject([{ code }])
  })
})

it('passes over blocks that it does not know, with one warning each', () => {
  const { value, diagnostics } = survey(`UserKeywords Mine; Mine { a b; } Novel { 'x' { } "y"; } Novel { }
    Header { Title "a { b"; Ann {* } *} } Signals { A In; Y Out; } Pattern p { Ann {* } *} V { A=0; Y=L; } /* } */ // }
    }`)
  expect(value?.report.patterns).toBe(1)
  expect(diagnostics.filter(({ code }) => code === 'ignored')).toMatchObject([{ severity: 'warning' }])
})

it('goes on after an error at the next statement, and lists each once', () => {
  const { diagnostics } = survey(`Signals { A Inn; B In; Y Out; }
    SignalGroups { g = "B"; h = 'B'; } Pattern p { V { h=0; } }`)
  expect(diagnostics.map(({ code }) => code)).toEqual(['syntax', 'syntax'])
})
