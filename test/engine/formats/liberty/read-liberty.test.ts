import { describe, expect, test } from 'vitest'
import type { LibraryCell } from '../../../../app/engine/circuit/cell-library.ts'
import { readLiberty } from '../../../../app/engine/formats/liberty/read-liberty.ts'

function read(cells: string) {
  return readLiberty({ name: 'own.lib', text: `library (own) {\n${cells}\n}\n` })
}

function readCell(cell: string): LibraryCell {
  const { value, diagnostics } = read(cell)
  expect(diagnostics).toEqual([])
  if (value === null) throw new Error('no library')
  return value.cells[0]
}

const variable = (index: number) => ({ kind: 'variable', index })

// SOURCE of what is read: the Liberty format, as its open users write it; every example is ours.
describe('syntax', () => {
  test('comments, continued lines, quoted and unquoted values, lists of pins, missing semicolons', () => {
    const cell = readCell(`/* a
      comment */ cell ("ND") { area : 3.5 // no semicolon
        pin (A, B) { direction : input; capacitance : 0.01; }
        pin (Y) { direction : "output"; function : "!(A \\
          * B)"; timing () { related_pin : "A B"; cell_rise (t) { values ("1, 2", \\
            "3, 4"); } } }
        cell_leakage_power : 1 ; }`)
    expect(cell.ports.map((port) => port.name)).toEqual(['A', 'B', 'Y'])
    expect(cell.pins[2].function).toEqual({
      kind: 'not',
      of: { kind: 'and', of: [variable(0), variable(1)] },
    })
    expect(
      readCell('cell (BF) { pin (A) { direction : input } pin (Y) { direction : output; function : A; } }')
        .kind,
    ).toBe('combinational')
  })

  test('supply pins are set apart, by the cell or by the voltages of the library', () => {
    const cell = readCell(`voltage_map (VNW, 1.2);
      cell (BF) { pg_pin (VDD) { pg_type : primary_power; } pin (A) { direction : input; }
        pin (Y) { direction : output; function : "A"; } }`)
    expect([cell.ports.length, cell.supplies]).toEqual([2, ['VDD', 'VNW']])
  })

  test('buses by type and bundles by members, bits from the left', () => {
    const { value, diagnostics } =
      read(`type (b3) { base_type : array; bit_width : 3; bit_from : 2; bit_to : 0; }
      define (my_attribute, cell, string);
      cell (REG) { ff_bank (IQ, IQN, 3) { clocked_on : "CK"; next_state : "D EN + IQ EN'"; }
        bus (D) { bus_type : b3; direction : input; pin (D[2]) { capacitance : 1; } }
        pin (CK) { direction : input; } pin (EN) { direction : input; }
        bus (Q) { bus_type : b3; direction : output; function : "IQ"; } }
      cell (PAIR) { bundle (Z) { members (Z1, Z0); direction : output; function : "A"; }
        bundle (A) { members ("A1, A0"); direction : input; } }`)
    expect(diagnostics).toEqual([])
    const [register, pair] = value?.cells ?? []
    expect(register.ports).toEqual([
      { name: 'D', pins: [0, 1, 2] },
      { name: 'CK', pins: [3] },
      { name: 'EN', pins: [4] },
      { name: 'Q', pins: [5, 6, 7] },
    ])
    expect(register.pins.map((pin) => pin.name).slice(0, 3)).toEqual(['D[2]', 'D[1]', 'D[0]'])
    // Bit k of the output is the state k, whose variable follows the eight pins.
    expect([5, 6, 7].map((pin) => register.pins[pin].function)).toEqual([8, 10, 12].map(variable))
    expect(register.states[1].next).toEqual({
      kind: 'or',
      of: [
        { kind: 'and', of: [variable(1), variable(4)] },
        { kind: 'and', of: [variable(10), { kind: 'not', of: variable(4) }] },
      ],
    })
    expect(pair.pins.map((pin) => [pin.name, pin.function])).toEqual([
      ['Z1', variable(2)],
      ['Z0', variable(3)],
      ['A1', null],
      ['A0', null],
    ])
  })
})

describe('kinds of cells', () => {
  const PINS = 'pin (D) { direction : input; } pin (E) { direction : input; }'
  const kindOf = (body: string) => read(`cell (C) { ${PINS} ${body} }`).value?.cells[0].kind

  test('are told from what the library says, never from a name', () => {
    expect(kindOf('pin (Q) { direction : output; function : "D E"; }')).toBe('combinational')
    expect(kindOf('')).toBe('physical')
    expect(kindOf('pin (Z) { direction : inout; driver_type : bus_hold; }')).toBe('physical')
    expect(kindOf('pin (Q) { direction : output; }')).toBe('black box')
    expect(
      kindOf(
        'latch (IQ, IQN) { enable : "E"; data_in : "D"; } pin (Q) { direction : output; function : "IQ"; }',
      ),
    ).toBe('latch')
    expect(
      kindOf(
        'ff (IQ, IQN) { clocked_on : "E"; next_state : "D"; } pin (Q) { direction : output; function : "IQ"; }',
      ),
    ).toBe('flip-flop')
    expect(kindOf('clock_gating_integrated_cell : "latch_posedge"; pin (Q) { direction : output; }')).toBe(
      'clock gate',
    )
  })

  test('a statetable is said to be unsupported and makes a black box', () => {
    const { value, diagnostics } = read(`cell (C) { ${PINS} pin (Q) { direction : output; function : "IQ"; }
      statetable ("D E", "IQ") { table : "H H : - : H"; } }`)
    expect(value?.cells[0]).toMatchObject({ kind: 'black box' })
    expect(diagnostics).toMatchObject([{ code: 'unsupported-construct', severity: 'warning' }])
    expect(diagnostics[0].message).toContain('statetable')
  })

  test('a three-state output keeps its condition', () => {
    const cell = readCell(
      `cell (T) { ${PINS} pin (Z) { direction : output; function : "D"; three_state : "!E"; } }`,
    )
    expect(cell.pins[2].threeState).toEqual({ kind: 'not', of: variable(1) })
  })
})

describe('scan flip-flops', () => {
  const cell = (body: string, next: string): string => `cell (S) {
    ff (IQ, IQN) { clocked_on : "CK"; next_state : "${next}"; clear : "!R"; clear_preset_var1 : L; }
    pin (CK) { direction : input; } pin (D) { direction : input; } pin (R) { direction : input; }
    pin (TI) { direction : input; ${body.includes('test_cell') ? '' : 'nextstate_type : scan_in;'} }
    pin (TE) { direction : input; ${body.includes('test_cell') ? '' : 'nextstate_type : scan_enable;'} }
    pin (Q) { direction : output; function : "IQ"; } ${body} }`
  const TEST_CELL = `test_cell () { pin (TI) { direction : input; signal_type : test_scan_in; }
    pin (TE) { direction : input; signal_type : test_scan_enable; }
    pin (Q) { direction : output; function : "IQ"; signal_type : test_scan_out; } }`

  test('are recognised by test_cell, or by nextstate_type', () => {
    const scan = { scanIn: 3, scanEnable: 4, shiftValue: 1 }
    expect(readCell(cell(TEST_CELL, "TE TI + TE' D")).scan).toEqual({ ...scan, scanOut: [5] })
    expect(readCell(cell('', "TE TI + TE' D")).scan).toEqual({ ...scan, scanOut: [] })
  })

  test('the value that shifts is worked out from next_state', () => {
    expect(readCell(cell(TEST_CELL, "TE D + TE' TI")).scan?.shiftValue).toBe(0)
    expect(readCell(cell(TEST_CELL, "TE TI' + TE' D")).scan?.shiftValue).toBe(1)
  })

  test('a cell whose scan pins do not shift is none, with a warning', () => {
    const { value, diagnostics } = read(cell(TEST_CELL, 'D TI TE'))
    expect(value?.cells[0]).toMatchObject({ kind: 'flip-flop', scan: null })
    expect(diagnostics.map((each) => each.severity)).toEqual(['warning'])
  })

  test('clear and preset and what they leave when both act', () => {
    const { states } = readCell(cell(TEST_CELL, "TE TI + TE' D"))
    expect(states[0]).toMatchObject({
      kind: 'flip-flop',
      clear: { kind: 'not', of: variable(2) },
      preset: null,
      both: [0, 'X'],
    })
  })
})

describe('findings', () => {
  test.each([
    ['library (x) { cell (C) { pin (A) { direction : input; } pin (Y) { direction : output; function : "A & 「BB」"; } } }', 'unknown-name', /"BB" is neither a pin/],
    ['library (x) { cell (C) { pin (Y) { direction : output; function : "(1 「」"; } } }', 'syntax', /expected "\)"/],
    ['library 「(x) {」 cell (C) { }', 'truncated', /no closing/],
    ['library (x) { cell (C) { area 「3」; } }', 'syntax', /expected ":" or "\("/],
    ['library (x) { comment : 「"」open; }', 'truncated', /never closed/],
    ['library (x) { 「include_file (other.lib)」; cell (C) { } }', 'unsupported-construct', /include_file/],
    ['library 「(x)」 { }', 'empty-file', /no cell/],
    ['「m」odule m; endmodule', 'wrong-file-type', /no library group/],
  ])('%s', (marked, code, message) => {
    const text = marked.replace(/[「」]/g, '')
    const { value, diagnostics } = readLiberty({ name: 'own.lib', text })
    const found = diagnostics.find((each) => each.severity === 'error')
    expect(value).toBeNull()
    expect([found?.code, found?.message]).toEqual([code, expect.stringMatching(message)])
    if (code === 'empty-file' || code === 'truncated') return
    expect(found?.span).toEqual({ start: marked.indexOf('「'), end: marked.indexOf('」') - 1 })
  }) // prettier-ignore

  test('text outside the library group is passed over with a warning', () => {
    const { value, diagnostics } = readLiberty({
      name: 'own.lib',
      text: 'stray words library (x) { cell (C) { pin (A) { direction : input; } } }',
    })
    expect(value?.cells).toHaveLength(1)
    expect(diagnostics).toMatchObject([{ code: 'ignored', severity: 'warning', span: { start: 0, end: 11 } }])
  })

  test('deep nesting is refused', () => {
    const { value, diagnostics } = readLiberty({
      name: 'own.lib',
      text: `library (x) { ${'a () { '.repeat(100_000)}`,
    })
    expect([value, diagnostics[0].code]).toEqual([null, 'limit'])
  })

  test('a caller can cancel', () => {
    const text = `library (x) { ${'cell (C) { }\n'.repeat(330_000)} }`
    expect(readLiberty({ name: 'own.lib', text }, { onProgress: () => false })).toEqual({
      value: null,
      diagnostics: [],
    })
  })
})
