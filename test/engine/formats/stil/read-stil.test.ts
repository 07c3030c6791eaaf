import { describe, expect, it } from 'vitest'
import type { Netlist } from '../../../../app/engine/circuit/netlist.ts'
import { readStil, surveyStil, proposeTestPins } from '../../../../app/engine/formats/stil/read-stil.ts'
import { compareResponse } from '../../../../app/engine/simulate/compare-response.ts'
import { bitAt, type BitPlane, type PatternSet } from '../../../../app/engine/simulate/pattern-set.ts'
import { smallScanDesign, smallStil } from './small-scan-design.ts'

// Each expectation here is worked by hand from IEEE 1450-1999: the clause, from memory, stands where it is not
// plain scan practice.

const design = smallScanDesign()

function read(text: string, netlist: Netlist = design) {
  return readStil({ name: 'small.stil', text }, netlist)
}

function patternsOf(text: string, netlist: Netlist = design): PatternSet {
  const { value, diagnostics } = read(text, netlist)
  expect(diagnostics).toEqual([])
  if (value === null) throw new Error('no value')
  return value.patterns
}

/** Values of all input rows, a word a pattern, in the order A B F1 F2 F3. */
function inputsOf(patterns: PatternSet): string[] {
  return eachPattern(patterns, (pattern) =>
    column(patterns.value, pattern, (row) =>
      patterns.unknown !== null && bitAt(patterns.unknown, row, pattern) ? 'X' : '10',
    ),
  )
}

/** Expected values of all response rows in the order Y Z F1 F2 F3; '-' where nothing is expected or it is masked. */
function expectsOf(patterns: PatternSet): string[] {
  const { expected, observed } = patterns
  return eachPattern(patterns, (pattern) =>
    expected === null
      ? ''
      : column(expected.value, pattern, (row) =>
          bitAt(expected.care, row, pattern) && (observed === null || bitAt(observed, row, pattern))
            ? 'HL'
            : '-',
        ),
  )
}

function eachPattern(patterns: PatternSet, text: (pattern: number) => string): string[] {
  return Array.from({ length: patterns.nPatterns }, (_, pattern) => text(pattern))
}

/** One sign a row: the first of two where the bit is 1, else the second; a single sign stands for itself. */
function column(plane: BitPlane, pattern: number, signs: (row: number) => string): string {
  return Array.from({ length: plane.rows }, (_, row) => {
    const sign = signs(row)
    return sign.length === 1 ? sign : sign[bitAt(plane, row, pattern) ? 0 : 1]
  }).join('')
}

describe('scan loads and unloads', () => {
  it('puts the first scan-in character into the cell next to scan-out, and takes the unload for the pattern before', () => {
    const patterns = patternsOf(
      smallStil(`Call load { SI=100; } Call capture { pi=10; po=LH; }
        Call load { SI=011; SO=LHH; } Call capture { pi=01; po=LL; }
        Call load { SO=HLX; }`),
    )
    // F3 is next to scan-out: it takes the 1 of 100. SO shows F3, F2, F1 in this order.
    expect(inputsOf(patterns)).toEqual(['10001', '01110'])
    expect(expectsOf(patterns)).toEqual(['LHHHL', 'LL-LH'])
  })

  it('counts the cycles of each load with its pattern, the last unload apart, and time by the period', () => {
    const { value } = read(
      smallStil(`V { CK=0; SE=0; pi=00; } Call load { SI=100; } Call capture { pi=10; po=LH; }
        Call load { SI=011; SO=LHH; } Call capture { pi=01; po=LL; } Call load { SO=HLX; }`),
    )
    expect(Array.from(value?.patterns.cycles ?? [])).toEqual([4, 4])
    expect(value?.report.cycles).toEqual({ total: 12, opening: 1, closing: 3, shift: 9, areExact: true })
    expect(value?.report.milliseconds).toBeCloseTo(12 * 100e-6, 12)
    expect(value?.report.vectors).toBe(6)
  })

  it('honours inversions before and behind a cell', () => {
    const cells = [
      { flipFlop: 0, instance: 'F1', loadInverted: false, unloadInverted: true },
      { flipFlop: 1, instance: 'F2', loadInverted: true, unloadInverted: false },
      { flipFlop: 2, instance: 'F3', loadInverted: true, unloadInverted: false },
    ]
    const structures = 'ScanChain c1 { ScanIn SI; ScanOut SO; ScanInversion 1; ScanCells F1 ! F2 F3; }'
    const text = smallStil('Call load { SI=110; } Call capture { pi=10; po=XX; } Call load { SO=HHH; }', {
      structures,
    })
    const expected = { inputs: ['10000'], expects: ['--LHH'] }
    const traced = patternsOf(text, smallScanDesign({ cells }))
    expect({ inputs: inputsOf(traced), expects: expectsOf(traced) }).toEqual(expected)
    const declared = patternsOf(text, smallScanDesign({ hasChain: false }))
    expect({ inputs: inputsOf(declared), expects: expectsOf(declared) }).toEqual(expected)
  })

  it('pads short scan-in data in front and short scan-out data behind (clause 24)', () => {
    const signals = 'CK In; SE In; SI In; SJ In; A In; B In; Y Out; Z Out; SO Out; SP Out;'
    const waveforms = `CK { 01P { '0ns' D/U/D; '50ns' D/U/U; '80ns' D/U/D; } }
      'SE + SI + SJ + A + B' { 01 { '0ns' D/U; } } 'outs + SP' { LHX { '40ns' L/H/X; } }`
    const structures = `ScanChain c1 { ScanLength 1; ScanIn SI; ScanOut SO; ScanCells F1; }
      ScanChain c2 { ScanLength 2; ScanIn SJ; ScanOut SP; ScanCells F2 F3; }`
    const procedures = `load { W t; C { CK=0; SE=1; } Shift { V { CK=P; SI=#; SJ=#; SO=#; SP=#; } } }
      capture { W t; V { CK=P; SE=0; pi=##; po=##; } }`
    const text = smallStil(
      'Call load { SI=1; SJ=01; } Call capture { pi=00; po=XX; } Call load { SI=0; SJ=00; SO=L; SP=HL; }',
      { signals, waveforms, structures, procedures },
    )
    const patterns = patternsOf(text, smallScanDesign({ hasChain: false }))
    expect(inputsOf(patterns)).toEqual(['00110'])
    expect(expectsOf(patterns)).toEqual(['--LLH'])
  })

  it('shows a load without capture as what it is: expected at the unload, and not observed', () => {
    const text = smallStil(
      'Call load { SI=011; } Call look { pi=11; po=HL; } Call load { SI=111; SO=LHH; } Call capture { pi=10; po=LH; } Call load { SO=HLH; }',
    )
    const { value } = read(text)
    expect(Array.from(value?.patterns.withoutCapture ?? [])).toEqual([1, 0])
    expect(expectsOf(value!.patterns)).toEqual(['HL---', 'LHHLH'])
    expect(compareResponse(design, value!.patterns).loads).toEqual({ compared: 3, mismatches: 0, unknown: 0 })
  })

  it('takes the strobe after the clock edge in shift for what it shows then: the next cell', () => {
    const waveforms = `CK { 01P { '0ns' D/U/D; '20ns' D/U/U; '30ns' D/U/D; } }
      'SE + SI + A + B' { 01 { '0ns' D/U; } } 'po' { LHX { '10ns' L/H/X; } } SO { LHX { '90ns' L/H/X; } }`
    const procedures = `load { W t; C { CK=0; SE=1; } V { SO=#; } Shift { V { CK=P; SI=#; SO=#; } } }
      capture { W t; V { CK=P; SE=0; SO=X; pi=##; po=##; } }`
    const text = smallStil(
      'Call load { SI=000; } Call capture { pi=10; po=XX; } Call load { SI=111; SO=LHHX; } Call capture { pi=00; po=XX; }',
      { waveforms, procedures },
    )
    expect(expectsOf(patternsOf(text))[0]).toBe('--HHL')
  })
})

describe('what one time frame can not show', () => {
  const captureTwice = `load { W t; C { CK=0; SE=1; } Shift { V { CK=P; SI=#; SO=#; } } }
    capture { W t; V { CK=P; SE=0; pi=##; po=##; } V { CK=P; po=XX; } }`

  it('counts a pattern with two captures for time alone', () => {
    const { value, diagnostics } = read(
      smallStil(
        'Call load { SI=100; } Call capture { pi=10; po=LH; } Call load { SI=000; SO=LLL; } Call capture { pi=11; po=HL; }',
        {
          procedures: captureTwice,
        },
      ),
    )
    expect(diagnostics).toMatchObject([{ code: 'ignored', severity: 'warning' }])
    expect(Array.from(value!.patterns.timeOnly ?? [])).toEqual([1, 1])
    expect(value!.report.timeOnly).toEqual([{ reason: 'more than one capture', count: 2, first: 0 }])
    expect(expectsOf(value!.patterns)).toEqual(['-----', '-----'])
    expect(Array.from(value!.patterns.cycles ?? [])).toEqual([5, 5])
  })

  it('does not observe an output that is compared after the capture edge of the same vector', () => {
    const waveforms = `CK { 01P { '0ns' D/U/D; '20ns' D/U/U; '30ns' D/U/D; } }
      'SE + SI + A + B' { 01 { '0ns' D/U; } } 'outs' { LHX { '90ns' L/H/X; } }`
    const { value } = read(smallStil('Call load { SI=100; } Call capture { pi=10; po=LH; }', { waveforms }))
    expect(expectsOf(value!.patterns)).toEqual(['-----'])
    expect(value!.report.expects.unusedAfterCapture).toBe(2)
  })

  it('drops compares that were made with other inputs than the capture', () => {
    const procedures = `load { W t; C { CK=0; SE=1; } Shift { V { CK=P; SI=#; SO=#; } } }
      capture { W t; V { CK=0; SE=0; pi=##; po=##; } V { CK=P; pi=##; po=XX; } }`
    const { value } = read(
      smallStil('Call load { SI=100; } Call capture { pi=1001; po=LH; } Call load { SO=LHL; }', {
        procedures,
      }),
    )
    expect(inputsOf(value!.patterns)).toEqual(['01001'])
    expect(expectsOf(value!.patterns)).toEqual(['--LHL'])
    expect(value!.report.expects.unusedOtherInputs).toBe(2)
  })

  it('takes a pin that lets go and one that only compares for the same unknown input', () => {
    const waveforms = `CK { 01P { '0ns' D/U/D; '50ns' D/U/U; '80ns' D/U/D; } } B { 01ZX { '0ns' D/U/Z/X; } }
      'SE + SI + A' { 01 { '0ns' D/U; } } outs { LHX { '40ns' L/H/X; } }`
    const procedures = `load { W t; C { CK=0; SE=1; } Shift { V { CK=P; SI=#; SO=#; } } }
      capture { W t; V { CK=0; SE=0; pi=##; po=##; } V { CK=P; pi=##; po=XX; } }`
    const patterns = patternsOf(
      smallStil('Call load { SI=100; } Call capture { pi=1Z1X; po=XH; } Call load { SO=XHH; }', {
        waveforms,
        procedures,
      }),
    )
    expect(inputsOf(patterns)).toEqual(['1X001'])
    expect(expectsOf(patterns)).toEqual(['-HHH-'])
  })

  const twoClocks = {
    signals: 'CK In; CL In; SE In; SI In; A In; B In; Y Out; Z Out; SO Out;',
    waveforms: `'CK + CL' { 01P { '0ns' D/U/D; '50ns' D/U/U; '80ns' D/U/D; } }
      'SE + SI + A + B' { 01 { '0ns' D/U; } } outs { LHX { '40ns' L/H/X; } }`,
    procedures: `load { W t; C { CK=0; CL=0; SE=1; } Shift { V { CK=P; CL=P; SI=#; SO=#; } } }
      capture { W t; V { CK=P; CL=0; SE=0; pi=##; po=##; } }`,
  }
  const pattern = 'Call load { SI=100; } Call capture { pi=10; po=LH; } Call load { SO=HHH; }'

  it('counts a capture on one of two scan clocks for time alone where the netlist does not tell who has which', () => {
    expect(read(smallStil(pattern, twoClocks)).value?.report.timeOnly).toEqual([
      { reason: 'other clocks than the scan clocks', count: 1, first: 0 },
    ])
  })

  it('lets flip-flops hold whose clock does not pulse, where the netlist tells', () => {
    const clocks = ['CK', 'CK', 'CL'].map((port) => ({ port, edge: 'rising' as const }))
    const testPins = ['CK', 'CL'].map((name) => ({ name, role: 'clock', value: 0, from: 'user' }) as const)
    const { value } = read(smallStil(pattern, twoClocks), smallScanDesign({ clocks, testPins }))
    expect(value?.report.timeOnly).toEqual([])
    // F3 is on CL, which rests: its unload is what was loaded.
    expect(expectsOf(value!.patterns)).toEqual(['LHHH-'])
    expect(value?.report.expects.held).toBe(1)
  })

  it('takes the state as X in vectors without a load, and says which of them depend on the one before', () => {
    const { value } = read(
      smallStil('V { CK=0; pi=11; po=HX; } V { CK=P; pi=10; po=LX; } V { CK=0; pi=01; po=LX; }', {
        structures: '',
      }),
      smallScanDesign({ hasChain: false }),
    )
    expect(inputsOf(value!.patterns)).toEqual(['11XXX', '10XXX', '01XXX'])
    expect(Array.from(value!.patterns.dependsOnPrevious ?? [])).toEqual([0, 1, 1])
    expect(value!.report.stateNotLoaded).toBe(3)
  })
})

describe('what vectors inherit', () => {
  it('keeps each signal until it is given another value, and a procedure restores what was before it', () => {
    const procedures = `load { W t; C { CK=0; SE=1; } Shift { V { CK=P; SI=#; SO=#; } } }
      other { W t; V { pi=00; } }`
    const text = smallStil(
      'C { CK=0; SE=0; po=XX; } V { pi=11; } Call load { SI=000; } Call other; V { CK=P; po=HX; } Call load { SO=XXX; }',
      { procedures },
    )
    expect(inputsOf(patternsOf(text))).toEqual(['11000'])
  })

  it('leaves inputs unknown that a procedure never sets, and a macro hands them on', () => {
    const body = `{ W t; V { CK=P; SE=0; po=##; } }`
    const procedures = `load { W t; C { CK=0; SE=1; } Shift { V { CK=P; SI=#; SO=#; } } } cap ${body}`
    const pattern = (call: string): string =>
      `C { CK=0; SE=0; pi=11; po=XX; } Call load { SI=000; } ${call} cap { po=HX; } C { po=XX; } Call load { SO=XXX; }`
    const asProcedure = read(smallStil(pattern('Call'), { procedures })).value!
    expect(inputsOf(asProcedure.patterns)).toEqual(['XX000'])
    expect(asProcedure.report.inputsWithoutValue).toEqual(['A', 'B'])
    const asMacro = patternsOf(
      smallStil(pattern('Macro'), { procedures, before: `MacroDefs { cap ${body} }` }),
    )
    expect(inputsOf(asMacro)).toEqual(['11000'])
  })

  it('expands repeats, hexadecimal and decimal data (clause 21.1)', () => {
    const text = smallStil(
      `V { CK=0; SE=0; SI=0; pi=\\r2 1; po=XX; } Call load { SI=\\l3 \\h 4; } Call capture { pi=\\d 2; po=\\r2 X; }
       Call load { SI=\\r1 0 \\r2 1; SO=\\l3 \\hLH 5; } Call capture { pi=\\h 1; po=LX; } Call load { SO=\\r3 X; }`,
    )
    const patterns = patternsOf(text)
    expect(inputsOf(patterns)).toEqual(['10001', '01110'])
    expect(expectsOf(patterns)).toEqual(['--HLH', 'L----'])
  })

  it('runs loops, counts them once in memory, and counts long idle ones at once', () => {
    const { value } = read(
      smallStil('Loop 1000000 { V { CK=0; SE=0; SI=0; pi=00; po=XX; } } Loop 2 { V { pi=11; po=HX; } }', {
        structures: '',
      }),
      smallScanDesign({ hasChain: false }),
    )
    expect(value?.report.cycles.total).toBe(1_000_002)
    expect(value?.report.patterns).toBe(2)
    expect(value?.report.vectors).toBe(2)
  })

  it('counts a MatchLoop once and says that it is not supported', () => {
    const { value, diagnostics } = read(
      smallStil('MatchLoop Infinite { V { CK=0; SE=0; SI=0; pi=00; po=LX; } BreakPoint { V { pi=01; } } }', {
        structures: '',
      }),
      smallScanDesign({ hasChain: false }),
    )
    expect(diagnostics[0]).toMatchObject({ code: 'unsupported-construct', severity: 'warning' })
    expect(value?.report.cycles).toMatchObject({ total: 2, areExact: false })
  })

  it('reads included files, and says which one is missing', () => {
    const text = `STIL 1.0; Include "pins.stil"; SignalGroups { g = 'A + Y'; }
      PatternExec { PatternBurst b; } PatternBurst b { PatList { p; } } Pattern p { V { g=1H; } }`
    const pins = { name: 'pins.stil', text: 'STIL 1.0; Signals { A In; Y Out; }' }
    const include = (name: string) => (name === 'pins.stil' ? pins : null)
    expect(surveyStil({ name: 'x', text }, { include }).value?.report.patterns).toBe(1)
    const { value, diagnostics } = surveyStil({ name: 'x', text })
    expect(value).toBeNull()
    expect(diagnostics[0]).toMatchObject({ code: 'unknown-name', span: { start: 18, end: 29 } })
  })
})

describe('input that is not right', () => {
  const span = (text: string, part: string) => ({
    start: text.indexOf(part),
    end: text.indexOf(part) + part.length,
  })

  it.each([
    ['an unknown signal', 'V { CK=0; Q=1; }', 'unknown-signal', 'Q'],
    ['data of the wrong width', 'V { pi=011; }', 'width-mismatch', 'pi=011'],
    ['an unknown procedure', 'Call lod { SI=000; }', 'unknown-name', 'lod'],
    ['an unknown table', 'W slow; V { pi=00; }', 'unknown-name', 'W slow'],
    ['a statement that is none', 'VV { pi=00; }', 'syntax', 'VV'],
    ['a jump', 'V { pi=00; po=LX; } Goto here;', 'unsupported-construct', 'Goto'],
  ])('names %s with its place', (_, statement, code, part) => {
    const text = smallStil(statement)
    const { value, diagnostics } = read(text)
    expect(value).toBeNull()
    expect(diagnostics[0]).toMatchObject({ code, severity: 'error' })
    const from = text.indexOf(statement)
    expect(diagnostics[0]?.span.start).toBe(from + statement.indexOf(part))
  })

  it('refuses a chain of another length than the netlist has', () => {
    const structures = 'ScanChain c1 { ScanLength 4; ScanIn SI; ScanOut SO; ScanCells F1 F2 F3 F4; }'
    const text = smallStil('Call load { SI=0000; } Call capture { pi=00; po=LX; }', { structures })
    const { value, diagnostics } = read(text)
    expect(value).toBeNull()
    expect(diagnostics).toMatchObject([{ code: 'width-mismatch', severity: 'error' }])
  })

  it('warns of cells in another order than the netlist has', () => {
    const structures =
      'ScanChain c1 { ScanLength 3; ScanIn SI; ScanOut SO; ScanCells top.F1.SI top.F3.SI top.F2.SI; }'
    const text = smallStil('Call load { SI=000; } Call capture { pi=00; po=LX; }', { structures })
    const { value, diagnostics } = read(text)
    expect(value?.report.chains).toMatchObject([{ agrees: false }])
    expect(diagnostics).toMatchObject([{ code: 'unknown-name', severity: 'warning', span: span(text, 'c1') }])
  })

  it('refuses patterns of another netlist', () => {
    const text = 'STIL 1.0; Signals { In1 In; Out1 Out; } Pattern p { V { In1=0; Out1=L; } }'
    expect(read(text)).toMatchObject({
      value: null,
      diagnostics: [{ code: 'missing-signal', severity: 'error' }],
    })
  })

  it.each([
    ['', 'empty-file'],
    ['INPUT(a)', 'wrong-file-type'],
    ['STIL 1.0; Signals { A In;', 'truncated'],
    ['STIL 1.0; Signals { A In; }', 'no-patterns'],
    ['STIL 1.0; Signals { A In; } SignalGroups { g = "A"; }', 'syntax'],
    [`STIL 1.0; Signals { A In; } SignalGroups { g = 'h'; h = 'g'; } Pattern p { V { g=0; } }`, 'syntax'],
    ['STIL 1.0; Signals { A In; A In; }', 'duplicate-declaration'],
    [`STIL 1.0; Signals { A In; } Pattern p { Call x; } Procedures { x { Call x; } }`, 'limit'],
  ])('refuses %j with the code %s', (text, code) => {
    const { value, diagnostics } = surveyStil({ name: 'x', text })
    expect(value).toBeNull()
    expect(diagnostics.filter(({ severity }) => severity === 'error')[0]).toMatchObject({ code })
  })

  it('takes a character without a waveform as unknown, with a warning', () => {
    const { value, diagnostics } = read(smallStil('Call load { SI=100; } Call capture { pi=1Q; po=LH; }'))
    expect(inputsOf(value!.patterns)).toEqual(['1X001'])
    expect(diagnostics).toMatchObject([{ code: 'unknown-character', severity: 'warning' }])
  })

  it('stops when asked to, without a value', () => {
    const text = smallStil('V { CK=0; SE=0; SI=0; pi=11; po=HX; }\n'.repeat(200_000), { structures: '' })
    const seen: number[] = []
    const { value, diagnostics } = readStil({ name: 'x', text }, design, {
      onProgress: (done) => seen.push(done) < 1,
    })
    expect({ value, diagnostics, calls: seen.length }).toEqual({ value: null, diagnostics: [], calls: 1 })
  })
})

describe('proposeTestPins', () => {
  it('finds clocks at rest, scan enables as in capture, scan-ins and pins that hold still', () => {
    const signals = 'CK In; SE In; SI In; RN In; A In; B In; Y Out; Z Out; SO Out;'
    const waveforms = `CK { 01P { '0ns' D/U/D; '50ns' D/U/U; '80ns' D/U/D; } } RN { 1P { '0ns' U; '50ns' U/D; '80ns' U; } }
      'SE + SI + A + B' { 01 { '0ns' D/U; } } outs { LHX { '40ns' L/H/X; } }`
    const procedures = `load { W t; C { CK=0; SE=1; RN=1; } Shift { V { CK=P; SI=#; SO=#; } } }
      capture { W t; V { CK=P; SE=0; RN=1; A=0; B=#; po=##; } }`
    const text = smallStil(
      'Call load { SI=100; } Call capture { B=1; po=LH; } Call load { SI=011; } Call capture { B=0; po=LL; }',
      {
        signals,
        waveforms,
        procedures,
      },
    )
    const pins = proposeTestPins({ name: 'x', text }, ['CK', 'SE', 'SI', 'RN', 'A', 'B'])
    expect(pins.map(({ name, role, value }) => `${name} ${role} ${value}`)).toEqual([
      'CK clock 0',
      'SE scan-enable 0',
      'SI scan-in X',
      'RN reset 1',
    ])
  })
})
