import { describe, expect, test } from 'vitest'
import { GateKind, patternWidth } from '../../../../app/engine/circuit/circuit.ts'
import { readVerilog, type VerilogOptions } from '../../../../app/engine/formats/verilog/read-verilog.ts'
import { emptyNetWords, evaluateWord } from '../../../../app/engine/simulate/good-machine.ts'

function read(text: string, options: VerilogOptions = {}) {
  const { value, diagnostics } = readVerilog([{ name: 'own.v', text }], options)
  expect(diagnostics.filter((each) => each.severity === 'error')).toEqual([])
  if (value === null) throw new Error('no netlist')
  return value
}

/** The gates as text, `NET = KIND(inputs)`, in the order of the nets. */
function gates(text: string): string[] {
  const { circuit } = read(text)
  const kinds = Object.entries(GateKind)
  return Array.from({ length: circuit.nNets }, (_, net) => net)
    .filter((net) => circuit.kind[net] >= GateKind.FlipFlop)
    .map((net) => {
      const inputs = circuit.fanin.subarray(circuit.faninStart[net], circuit.faninStart[net + 1])
      const kind = kinds.find(([, code]) => code === circuit.kind[net])?.[0]
      return `${circuit.names[net]} = ${kind}(${Array.from(inputs, (each) => circuit.names[each]).join(', ')})`
    })
}

/** The outputs' values, 0, 1 or x, for input values in the circuit's order. */
function evaluate(text: string, inputs: string): string {
  const { circuit } = read(text)
  expect(inputs).toHaveLength(patternWidth(circuit))
  const nets = emptyNetWords(circuit)
  circuit.inputs.forEach((net, at) => {
    if (inputs[at] === '1') nets.one[net] = ~0
    if (inputs[at] === '0') nets.zero[net] = ~0
  })
  circuit.kind.forEach((kind, net) => {
    if (kind === GateKind.Const1) nets.one[net] = ~0
    if (kind === GateKind.Const0) nets.zero[net] = ~0
  })
  evaluateWord(circuit, nets)
  return Array.from(circuit.outputs, (net) => (nets.one[net] ? '1' : nets.zero[net] ? '0' : 'x')).join('')
}

const namesOf = (text: string, list: 'inputs' | 'outputs' | 'flipFlops'): string[] => {
  const { circuit } = read(text)
  return Array.from(circuit[list], (net) => circuit.names[net])
}

// SOURCE of what each construct means: IEEE 1364-2005, by the clause that a test names.
describe('gates and assignments', () => {
  test('primitives become gates with their inputs in order, buf and not with several outputs one each (7.2, 7.3)', () => {
    const text = `module m (a, b, y, z, w); input a, b; output y, z, w;
      nand #(1,2) g1 (n, a, b), (y, n, a, b);
      not (strong0, pull1) (z, w, n);
    endmodule`
    expect(gates(text)).toEqual(
      ['y = Nand(n, a, b)', 'z = Not(n)', 'w = Not(n)', 'n = Nand(a, b)'].sort(byNet(text)),
    )
  })

  function byNet(text: string) {
    const { names } = read(text).circuit
    const place = (gate: string): number => names.indexOf(gate.split(' ')[0])
    return (a: string, b: string): number => place(a) - place(b)
  }

  test('each operator is a gate; inner nets are named after the target (5.1)', () => {
    expect(gates('module m (input a, b, c, output y); assign y = ~(a & b) | c ^ a; endmodule')).toEqual([
      'y = Or(y:2, y:3)',
      'y:1 = And(a, b)',
      'y:2 = Not(y:1)',
      'y:3 = Xor(c, a)',
    ])
  })

  test('operators bind as the standard orders them: ~ & ^ | && || ?: (table 5-4)', () => {
    const text = 'module m (input a, b, c, d, output y); assign y = a | b & c ^ d; endmodule'
    for (let bits = 0; bits < 16; bits++) {
      const [a, b, c, d] = [8, 4, 2, 1].map((bit) => ((bits & bit) !== 0 ? 1 : 0))
      expect(evaluate(text, `${a}${b}${c}${d}`)).toBe(String(a | ((b & c) ^ d)))
    }
  })

  test('a conditional keeps equal data known under an unknown select (5.1.13)', () => {
    const text = 'module m (input s, a, b, output y); assign y = s ? a : b; endmodule'
    expect(['x11', 'x00', 'x10', '1x0', '0x0', '110'].map((bits) => evaluate(text, bits))).toEqual(
      ['1', '0', 'x', 'x', '0', '1'], // prettier-ignore
    )
  })

  test('padding of wide constants makes no gates, and the values are those of the whole width (5.4)', () => {
    const text = `module m (input s, a, output [2:0] y, output z);
      assign y = s ? 65536'b10 : {2'b0, a}; assign z = (4'b0 ~^ {3'b0, a}) == 4'b1111;
    endmodule`
    expect(['00', '01', '10', '11'].map((bits) => evaluate(text, bits))).toEqual(
      ['0001', '0010', '0101', '0100'], // prettier-ignore
    )
    expect(gates(text).length).toBeLessThan(40)
  })

  test('reductions, logical operators and equality take whole vectors (5.1.7 to 5.1.11)', () => {
    const text = `module m (input [2:0] a, output [5:0] y);
      assign y = {&a, |a, ^a, !a, a == 3'd5, a != 3'b101 && a};
    endmodule`
    expect(evaluate(text, '101')).toBe('010010')
    expect(evaluate(text, '111')).toBe('111001')
    expect(evaluate(text, '000')).toBe('000100')
  })

  test('a plain assignment is a buffer, and a constant drives its net itself', () => {
    const text = "module m (input a, output y, z); assign y = a; assign z = 1'b1; endmodule"
    expect(gates(text)).toEqual(['y = Buffer(a)', 'z = Const1()'])
  })
})

describe('vectors', () => {
  test('bits stand from the left, in either direction (4.3.1)', () => {
    const text = `module m (input [2:0] a, input [0:1] b, output [1:0] y);
      assign y = {a[2], b[1]}; endmodule`
    expect(namesOf(text, 'inputs')).toEqual(['a[2]', 'a[1]', 'a[0]', 'b[0]', 'b[1]'])
    expect(gates(text)).toEqual(['y[1] = Buffer(a[2])', 'y[0] = Buffer(b[1])'])
  })

  test('selects, concatenations on both sides and replications match bit for bit (5.1.14, 5.2)', () => {
    const text = `module m (input [7:4] a, input [0:3] b, output [7:0] y, output z);
      assign {y[7:6], z, y[5:0]} = {a[5 -: 2], {2{b[1:2]}}, b[0], a[7], b[3]}; endmodule`
    //                      a5 a4 | b1 b2 b1 b2 b0 a7 b3 onto y7 y6 z y5 y4 y3 y2 y1 y0
    expect(evaluate(text, '10010110')).toBe(['01', '1', '1', '1', '0', '1', '0'].join('') + '1')
  })

  test('constants in every base, sized and not (3.5.1)', () => {
    const text = `module m (output [15:0] y, output [4:0] z);
      assign y = {4'hA, 4'b1_100, 3'o5, 5'd19}; assign z = 'h1F; endmodule`
    expect(evaluate(text, '')).toBe('1010' + '1100' + '101' + '10011' + '11111')
  })

  test('an unequal width is padded or cut at the left, with a warning (5.5)', () => {
    const text = 'module m (input [1:0] a, output [3:0] y, output z); assign y = a; assign z = a; endmodule'
    const { diagnostics } = readVerilog([{ name: 'own.v', text }])
    expect(diagnostics.map((each) => each.code)).toEqual(['width-mismatch', 'width-mismatch'])
    expect(evaluate(text, '10')).toBe('0010' + '0')
  })
})

describe('names and what is passed over', () => {
  test('escaped names are the plain name, and a scalar that looks like a bit stays apart from it (3.7.1)', () => {
    const text = `module m (\\a+b , \\c , \\v[1] , v, y); input \\a+b , c, \\v[1] ; input [1:0] v; output y;
      and (y, \\a+b , \\c , \\v[1] , v[1]); endmodule`
    expect(namesOf(text, 'inputs')).toEqual(['a+b', 'c', '\\v[1]', 'v[1]', 'v[0]'])
  })

  test('comments, attributes, directives and specify blocks are passed over (3.3, 3.8, 19)', () => {
    const text = `\`timescale 1ns / 1ps
      \`celldefine
      (* top = "*)" *) module m (a, y); // a comment
        input a; output y; /* another ; */
        \`ifdef NEVER
          assign y = nonsense +;
        \`elsif NEVER2
          more
        \`else
          (* keep *) buf b (y, a);
        \`endif
        specify (a => y) = (1, 2); endspecify
      endmodule`
    expect(gates(text)).toEqual(['y = Buffer(a)'])
  })

  test('parameters are constants in ranges and selects (4.10)', () => {
    const text = `module m #(parameter W = 2 + 1) (input [W-1:0] a, output y);
      localparam TOP = W - 1; assign y = a[TOP]; endmodule`
    expect(gates(text)).toEqual(['y = Buffer(a[2])'])
  })

  test('supply nets are constants (4.6.6)', () => {
    const text = 'module m (input a, output y); supply1 vdd; and (y, a, vdd); endmodule'
    expect(gates(text)).toEqual(["1'b1 = Const1()", "y = And(a, 1'b1)"])
  })
})

describe('hierarchy', () => {
  const LEAF =
    'module leaf (input [1:0] d, output q, r); xor (q, d[0], d[1]); wire n; not (n, d[0]); buf (r, n); endmodule'

  test('is flattened, inner names joined with "/", ports named as in the parent (12.3)', () => {
    const text = `${LEAF} module top (input a, b, output y); leaf u1 (.d({a, b}), .q(y), .r()); endmodule`
    expect(gates(text)).toEqual(['y = Xor(b, a)', 'u1/n = Not(b)', 'u1/r = Buffer(u1/n)'])
  })

  test('connects by position, leaves ports open and goes to any depth', () => {
    const text = `${LEAF}
      module middle (input [1:0] d, output q); leaf inner (d, q,); endmodule
      module top (input [1:0] a, output y); middle m1 (a, y); endmodule`
    expect(gates(text)).toContain('m1/inner/n = Not(a[0])')
  })

  test('the top is the module that no other instantiates, or the one that is asked for', () => {
    const text = `${LEAF} module top (input [1:0] a, output y); leaf u (a, y,); endmodule`
    expect(read(text).circuit.name).toBe('top')
    expect(read(text, { top: 'leaf' }).circuit.inputs).toHaveLength(2)
  })

  test('several files are one netlist', () => {
    const { value } = readVerilog([
      { name: 'top.v', text: 'module top (input [1:0] a, output y); leaf u (a, y,); endmodule' },
      { name: 'leaf.v', text: LEAF },
    ])
    expect(value?.circuit.names).toContain('u/n')
  })
})

describe('flip-flops of a netlist of gates', () => {
  test('the one-clock form is in the full-scan view, and its clock is no input of the patterns', () => {
    const text = `module dff (CK, Q, D); input CK, D; output Q; reg Q; always @ (posedge CK) Q <= D; endmodule
      module m (VDD, CK, a, y); input VDD, CK, a; output y;
        dff f0 (CK, q, d); xor (d, a, q); buf (y, q); endmodule`
    expect(namesOf(text, 'inputs')).toEqual(['a'])
    expect(namesOf(text, 'flipFlops')).toEqual(['q'])
    const { clocks, report } = read(text)
    expect(clocks).toEqual([{ port: 'CK', edge: 'rising' }])
    expect(report.testPins).toEqual([{ name: 'CK', role: 'clock', value: 0, from: 'library' }])
  })

  test('vectors, blocks and expressions give a flip-flop for each bit', () => {
    const text = `module m (input ck, input [1:0] a, output reg [1:0] q);
      always @(posedge ck) begin q[1] <= a[1] & q[0]; q[0] <= #1 a[0]; end endmodule`
    expect(gates(text)).toEqual([
      'q[1] = FlipFlop(q[1]:1)',
      'q[0] = FlipFlop(a[0])',
      'q[1]:1 = And(a[1], q[0])',
    ])
  })

  test('an input that reaches nothing stays an input where there is no flip-flop', () => {
    expect(namesOf('module m (input a, b, output y); buf (y, a); endmodule', 'inputs')).toEqual(['a', 'b'])
  })

  test('a two-phase pair of switches on triregs is such a flip-flop', () => {
    const text = `module dff (CK,Q,D); input CK,D; output Q; wire NM,NCK; trireg NQ,M;
        nmos N7 (M,D,NCK); not P3 (NM,M); nmos N9 (NQ,NM,CK); not P5 (Q,NQ); not P1 (NCK,CK); endmodule
      module m (CK, a, q); input CK, a; output q; dff f (CK, q, a); endmodule`
    expect(gates(text)).toEqual(['q = FlipFlop(a)'])
  })

  test('several clocks are taken as one pulse, with a warning', () => {
    const text = `module m (input c1, c2, a, output reg p, q); always @(posedge c1) p <= a; always @(posedge c2) q <= a; endmodule`
    const { value, diagnostics } = readVerilog([{ name: 'own.v', text }])
    expect(diagnostics.map((each) => each.message)).toEqual([expect.stringContaining('2 clocks (c1, c2)')])
    expect(value?.circuit.inputs).toHaveLength(1)
  })

  test('a clock that logic makes, or that falls where others rise, makes a source of X', () => {
    const text = `module m (input ck, en, a, output reg p, q, r, s); and (g, ck, en); not (nck, ck);
      always @(posedge ck) p <= a; always @(posedge g) q <= a; always @(posedge nck) r <= a;
      always @(posedge ck) s <= a; endmodule`
    const { report, circuit } = read(text)
    expect(report.unusable).toMatchObject([{ kind: 'unscanned flip-flop', count: 2, examples: ['q', 'r'] }])
    expect(Array.from(report.unusable[0].sources, (net) => circuit.names[net])).toEqual(['q', 'r'])
    expect(Array.from(report.unusable[0].unobserved, (net) => circuit.names[net])).toEqual(['a'])
    expect(circuit.flipFlops).toHaveLength(2)
  })
})

describe('what gives X', () => {
  test('an unknown module is one black box an instance: it drives what nothing else drives', () => {
    const text = `module m (input a, output y); ghost g1 (.i(a), .o(n)), g2 (n, y); endmodule`
    const { value, diagnostics } = readVerilog([{ name: 'own.v', text }])
    expect(diagnostics).toMatchObject([
      { code: 'unknown-cell', severity: 'warning', span: { start: 36, end: 38 } },
    ])
    expect(value?.report.cellsUnknown).toEqual([{ cell: 'ghost', count: 2 }])
    expect(value?.report.unusable).toMatchObject([{ kind: 'black box', count: 2 }])
    expect(Array.from(value?.circuit.kind ?? [])).toEqual([
      GateKind.Input,
      GateKind.Unknown,
      GateKind.Unknown,
    ])
  })

  test('several three-state drivers on a net give X, one gives X while it lets go (7.4)', () => {
    const one = 'module m (input a, e, output y); bufif1 (y, a, e); endmodule'
    expect(['11', '01', '10', 'x1'].map((bits) => evaluate(one, bits))).toEqual(['1', '0', 'x', 'x'])
    const low = 'module m (input a, e, output y); notif0 (y, a, e); endmodule'
    expect(['10', '00', '01'].map((bits) => evaluate(low, bits))).toEqual(['0', '1', 'x'])
    const two = 'module m (input a, e, output y); bufif1 (y, a, e); bufif0 (y, a, e); endmodule'
    expect(evaluate(two, '11')).toBe('x')
    expect(read(two).report.unusable).toMatchObject([{ kind: 'three-state net', count: 1, examples: ['y'] }])
  })

  test('a net that nothing drives, and a loop, which is cut where it closes', () => {
    const text =
      'module m (input a, output y, z); and (y, a, floating); nand (p, a, q); nand (q, p, a); buf (z, q); endmodule'
    const { value, diagnostics } = readVerilog([{ name: 'own.v', text }])
    expect(diagnostics.map((each) => each.code)).toEqual(['undriven-net', 'combinational-loop'])
    expect(diagnostics[1].message).toMatch(/: (p → q → p|q → p → q)$/)
    expect(value?.report.unusable.map((row) => [row.kind, row.count])).toEqual([
      ['undriven net', 1],
      ['cut loop', 1],
    ])
    expect(evaluate(text, '0')).toBe('0' + (evaluate(text, '0')[1] === 'x' ? 'x' : '1'))
  })
})

describe('long reading', () => {
  test('reports progress over all files and stops without a value when told to', () => {
    const text = `module m (input a, output y); ${'// filler\n'.repeat(500_000)} buf (y, a); ${' '.repeat(10)} endmodule`
    const seen: number[] = []
    const { value, diagnostics } = readVerilog([{ name: 'own.v', text }], {
      onProgress: (done, total) => {
        seen.push(done / total)
        return false
      },
    })
    expect([value, diagnostics, seen.length]).toEqual([null, [], 1])
  })
})
