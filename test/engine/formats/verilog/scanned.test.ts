import { describe, expect, test } from 'vitest'
import { readLiberty } from '../../../../app/engine/formats/liberty/read-liberty.ts'
import { readVerilog, type VerilogOptions } from '../../../../app/engine/formats/verilog/read-verilog.ts'
import { emptyNetWords, evaluateWord } from '../../../../app/engine/simulate/good-machine.ts'

const PINS = (names: string): string =>
  names.split(' ').map((name) => `pin (${name}) { direction : input; }`).join(' ') // prettier-ignore
const FLIP_FLOP = (name: string, state: string, pins: string): string =>
  `cell (${name}) { ff (IQ, IQN) { ${state} } ${PINS(pins)} pin (Q) { direction : output; function : "IQ"; } }`
const SCAN = (name: string, clock: string): string =>
  `cell (${name}) { ff (IQ, IQN) { clocked_on : "${clock}"; next_state : "SE SI + !SE D"; }
    ${PINS('CK D')} pin (SI) { direction : input; nextstate_type : scan_in; }
    pin (SE) { direction : input; nextstate_type : scan_enable; } pin (Q) { direction : output; function : "IQ"; } }`

const LIBRARY = `library (own) {
  cell (BF) { ${PINS('A')} pin (Y) { direction : output; function : "A"; } }
  cell (IV) { ${PINS('A')} pin (Y) { direction : output; function : "!A"; } }
  cell (ND) { ${PINS('A B')} pin (Y) { direction : output; function : "!(A B)"; } }
  cell (LT) { latch (IQ, IQN) { enable : "G"; data_in : "D"; } ${PINS('G D')}
    pin (Q) { direction : output; function : "IQ"; } }
  cell (CG) { clock_gating_integrated_cell : "latch_posedge"; ${PINS('CK E')} pin (G) { direction : output; } }
  cell (TS) { ${PINS('A E')} pin (Z) { direction : output; function : "A"; three_state : "!E"; } }
  ${FLIP_FLOP('DF', 'clocked_on : "CK"; next_state : "D";', 'CK D')}
  ${FLIP_FLOP('DR', 'clocked_on : "CK"; next_state : "D"; clear : "!R"; preset : "!S"; clear_preset_var1 : H; clear_preset_var2 : L;', 'CK D R S')}
  ${SCAN('SF', 'CK')}
  ${SCAN('SN', '!CK')}
}`

function readAll(text: string, options: VerilogOptions = {}) {
  const library = readLiberty({ name: 'own.lib', text: LIBRARY })
  expect(library.diagnostics.filter((each) => each.severity === 'error')).toEqual([])
  const result = readVerilog([{ name: 'own.v', text }], {
    ...options,
    libraries: library.value ? [library.value] : [],
  })
  expect(result.diagnostics.filter((each) => each.severity === 'error')).toEqual([])
  if (result.value === null) throw new Error('no netlist')
  return { netlist: result.value, diagnostics: result.diagnostics }
}

const read = (text: string, options: VerilogOptions = {}) => readAll(text, options).netlist
const kindsOf = (text: string, options: VerilogOptions = {}) =>
  read(text, options).report.unusable.map((row) => [row.kind, row.count, ...row.examples])

/** Values, 0, 1 or x, of outputs and then of what flip-flops take, for values of inputs and then of flip-flops. */
function respond(text: string, bits: string, options: VerilogOptions = {}): string {
  const { circuit } = read(text, options)
  const nets = emptyNetWords(circuit)
  ;[...circuit.inputs, ...circuit.flipFlops].forEach((net, at) => {
    if (bits[at] === '1') nets.one[net] = ~0
    else if (bits[at] === '0') nets.zero[net] = ~0
  })
  circuit.kind.forEach((kind, net) => {
    if (kind === 2) nets.zero[net] = ~0
    if (kind === 3) nets.one[net] = ~0
  })
  evaluateWord(circuit, nets)
  const taken = Array.from(circuit.flipFlops, (net) => circuit.fanin[circuit.faninStart[net]])
  return [...circuit.outputs, ...taken]
    .map((net) => (nets.one[net] ? '1' : nets.zero[net] ? '0' : 'x'))
    .join('')
}

// SOURCE: domain rule "never overstate": what is not a scanned flip-flop is no free input or output (common practice).
describe('what is scanned in a mapped netlist', () => {
  const TWO = `module m (input ck, se, si, a, output y, so);
    SF f0 (.CK(ck), .SE(se), .SI(si), .D(a), .Q(q0)); DF f1 (.CK(ck), .D(q0), .Q(q1));
    SF f2 (.CK(ck), .SE(se), .SI(q0), .D(q1), .Q(q2)); ND g (.A(q1), .B(q2), .Y(y)); BF b (.A(q2), .Y(so)); endmodule`

  test('a flip-flop on a chain, and no other: the rest are sources of X with unobserved inputs', () => {
    const { netlist, diagnostics } = readAll(TWO)
    expect(netlist.chains[0].cells.map((cell) => cell.instance)).toEqual(['f0', 'f2'])
    expect([netlist.circuit.flipFlops.length, netlist.report.flipFlops]).toEqual([2, 3])
    expect(kindsOf(TWO)).toEqual([['unscanned flip-flop', 1, 'f1']])
    expect(diagnostics.map((each) => [each.code, each.severity])).toEqual([['not-scanned', 'warning']])
    // ck se si a | f0 f2: f1 gives X, so y is known only where f2 is 0; f2 takes X, f0 takes a.
    expect(respond(TWO, '000100')).toBe('10' + '1x')
    expect(respond(TWO, '000101')).toBe('x1' + '1x')
    expect(respond(TWO, '011001'), 'in shift').toBe('x1' + '10')
  })

  test('every flip-flop where the caller assumes it, which is warned about', () => {
    const { netlist, diagnostics } = readAll(TWO, { assumeScanned: true })
    expect([netlist.circuit.flipFlops.length, netlist.report.unusable]).toEqual([3, []])
    expect(diagnostics[0].message).toContain('planning assumption')
    expect(netlist.clocks).toEqual(Array(3).fill({ port: 'ck', edge: 'rising' }))
  })

  test('chains run through inverters, and a scan enable through one', () => {
    const text = `module m (input ck, sen, si, a, output so); IV i0 (.A(sen), .Y(se));
      SF f0 (.CK(ck), .SE(se), .SI(si), .D(a), .Q(q0)); IV i1 (.A(q0), .Y(n0));
      SF f1 (.CK(ck), .SE(se), .SI(n0), .D(a), .Q(q1)); IV i2 (.A(q1), .Y(so)); endmodule`
    const { chains, report } = read(text)
    expect(chains[0].cells.map((cell) => [cell.loadInverted, cell.unloadInverted])).toEqual([
      [false, false],
      [true, true],
    ])
    expect(report.testPins.map((pin) => [pin.name, pin.role, pin.value])).toEqual([
      ['sen', 'scan-enable', 1],
      ['si', 'scan-in', 'X'],
      ['ck', 'clock', 0],
    ])
  })

  test('a chain without a scan-out, or behind a gated clock that logic makes, is none', () => {
    const open =
      'module m (input ck, se, si, a, output y); SF f (.CK(ck), .SE(se), .SI(si), .D(a), .Q(q)); ND g (.A(q), .B(a), .Y(y)); endmodule'
    const { netlist, diagnostics } = readAll(open)
    expect(netlist.chains).toEqual([])
    expect(diagnostics[0].message).toContain('no output shows it in shift')
    const gated =
      'module m (input ck, en, se, si, a, output so); ND g (.A(ck), .B(en), .Y(gck)); SF f (.CK(gck), .SE(se), .SI(si), .D(a), .Q(so)); endmodule'
    expect(readAll(gated).diagnostics[0].message).toContain('its clock comes from logic')
  })

  test('behind a clock gate a flip-flop is loaded, but what it takes is not known', () => {
    const text = `module m (input ck, en, se, si, a, output so); CG c (.CK(ck), .E(en), .G(g));
      SF f (.CK(g), .SE(se), .SI(si), .D(a), .Q(so)); endmodule`
    expect(kindsOf(text)).toEqual([
      ['clock gate', 1, 'c'],
      ['uncertain capture', 1, 'f'],
    ])
    expect(respond(text, '000011')).toBe('1x')
  })

  test('a flip-flop of the other edge is loaded, but what it takes is not known', () => {
    const text = `module m (input ck, se, si, a, output so); SF f0 (.CK(ck), .SE(se), .SI(si), .D(a), .Q(q0));
      SF f1 (.CK(ck), .SE(se), .SI(q0), .D(a), .Q(q1)); SN f2 (.CK(ck), .SE(se), .SI(q1), .D(a), .Q(so)); endmodule`
    const { report, clocks } = read(text)
    expect(report.unusable).toMatchObject([{ kind: 'uncertain capture', count: 1, examples: ['f2'] }])
    expect(clocks?.map((clock) => clock.edge)).toEqual(['rising', 'rising', 'falling'])
  })

  // SOURCE: a clear or preset acts at once, on the output and on what is stored; both at once as clear_preset_var says.
  test('clear and preset act as written', () => {
    const text = `module m (input ck, r, s, d, output q); DR f (.CK(ck), .D(d), .R(r), .S(s), .Q(q)); endmodule`
    const options = { assumeScanned: true }
    const at = (bits: string): string => respond(text, bits, options)
    // ck r s d | f: q, then what f takes.
    expect([at('01101'), at('01110')]).toEqual(['10', '01'])
    expect([at('00111'), at('01000'), at('00010')]).toEqual(['00', '11', '11'])
    expect(read(text, options).report.testPins).toMatchObject([
      { name: 'ck', role: 'clock', value: 0 },
      { name: 'r', role: 'reset', value: 1 },
      { name: 's', role: 'reset', value: 1 },
    ])
  })

  test('latches are sources of X; one three-state driver is not, several are', () => {
    const text = `module m (input g, a, e, output x, y, z); LT l (.G(g), .D(a), .Q(x));
      TS t0 (.A(a), .E(e), .Z(y)); TS t1 (.A(a), .E(e), .Z(z)); TS t2 (.A(g), .E(g), .Z(z)); endmodule`
    expect(kindsOf(text)).toEqual([
      ['three-state net', 1, 'z'],
      ['latch', 1, 'l'],
    ])
    expect([respond(text, '011'), respond(text, '010')]).toEqual(['x1x', 'xxx'])
  })

  test('pins that the caller sets open the way of a clock and are reported as his', () => {
    const text = `module m (input ck, tm, se, si, a, output so); ND g0 (.A(ck), .B(tm), .Y(n));
      SF f (.CK(n), .SE(se), .SI(si), .D(a), .Q(so)); endmodule`
    expect(read(text).chains).toEqual([])
    const pin = { name: 'tm', role: 'fixed', value: 1, from: 'user' } as const
    const { chains, clocks, report } = read(text, { testPins: [pin] })
    expect(chains).toHaveLength(1)
    expect(clocks).toEqual([{ port: 'ck', edge: 'falling' }])
    expect(report.testPins).toContainEqual(pin)
    expect(report.testPins).toContainEqual({ name: 'ck', role: 'clock', value: 1, from: 'library' })
    expect(readAll(text, { testPins: [{ ...pin, name: 'nobody' }] }).diagnostics[0].message).toContain(
      'no input is called',
    )
  })

  test('a plain assignment is a wire, and every output keeps its own name', () => {
    const text = `module m (input a, output y, z, w); wire n; BF b (.A(a), .Y(n)); assign y = n; assign z = n;
      assign w = a; endmodule`
    const { circuit, report } = read(text)
    expect(Array.from(circuit.outputs, (net) => circuit.names[net])).toEqual(['y', 'z', 'w'])
    expect(report.lines).toBe(2)
  })

  test('gates that stand beside cells have lines too', () => {
    const text = 'module m (input a, b, output y); BF u (.A(a), .Y(n)); assign y = n & b; endmodule'
    const { circuit } = read(text)
    const names = Array.from({ length: circuit.pins?.n ?? 0 }, (_, row) => circuit.pins?.nameOf(row))
    expect(names).toEqual(['u.A', 'u.Y', 'n>y.0', 'b>y.1', 'y'])
  })
})
