import { describe, expect, test } from 'vitest'
import { LineKind } from '../../../../app/engine/circuit/circuit.ts'
import { buildFaultList } from '../../../../app/engine/faults/build-fault-list.ts'
import { readLiberty } from '../../../../app/engine/formats/liberty/read-liberty.ts'
import { readVerilog } from '../../../../app/engine/formats/verilog/read-verilog.ts'
import { simulateGood } from '../../../../app/engine/simulate/good-machine.ts'
import { simulateTwin } from '../../../../app/engine/simulate/twin.ts'
import { randomPatterns } from '../../../helpers/random-run.ts'

const LIBRARY = `library (own) {
  cell (BF) { pin (A) { direction : input; } pin (Y) { direction : output; function : "A"; } }
  cell (MX) { pin (A) { direction : input; } pin (B) { direction : input; } pin (S) { direction : input; }
    pin (Y) { direction : output; function : "A S' + B S"; } }
  cell (AO) { pin (A) { direction : input; } pin (B) { direction : input; } pin (C) { direction : input; }
    pin (Y) { direction : output; function : "!(A B + C)"; } }
  cell (FA) { pin (A) { direction : input; } pin (B) { direction : input; } pin (CI) { direction : input; }
    pin (S) { direction : output; function : "A ^ B ^ CI"; }
    pin (CO) { direction : output; function : "(A B) + (CI (A + B))"; } }
  cell (FF) { ff (IQ, IQN) { clocked_on : "CK"; next_state : "(SE SI) + (!SE D)"; clear : "!RN"; }
    pin (CK) { direction : input; } pin (D) { direction : input; } pin (RN) { direction : input; }
    pin (SI) { direction : input; nextstate_type : scan_in; }
    pin (SE) { direction : input; nextstate_type : scan_enable; }
    pin (Q) { direction : output; function : "IQ"; } pin (QN) { direction : output; function : "IQN"; } }
}
`

const NETLIST = `module top (ck, se, si, rn, a, b, c, y, so);
  input ck, se, si, rn, a, b, c;
  output y, so;
  FF f0 (.CK(ck), .D(n1), .RN(rn), .SI(si), .SE(se), .Q(q0), .QN(m0));
  FF f1 (.CK(ck), .D(n2), .RN(1'b1), .SI(q0), .SE(se), .Q(so));
  MX m (.A(a), .B(m0), .S(b), .Y(n0));
  FA fa (.A(n0), .B(c), .CI(so), .S(n1), .CO(n2));
  AO ao (.A(n0), .B(q0), .C(n2), .Y(y));
endmodule
`

function read(text: string) {
  const library = readLiberty({ name: 'own.lib', text: LIBRARY }).value
  const { value, diagnostics } = readVerilog([{ name: 'own.v', text }], {
    libraries: library ? [library] : [],
  })
  expect(diagnostics.filter((each) => each.severity === 'error')).toEqual([])
  if (value === null) throw new Error('no netlist')
  return value
}

describe('faults on cell pins', () => {
  // SOURCE: the definition of the stuck-at fault: an input pin that is stuck reads as if it were tied.
  test('an input pin stuck at a value is detected just where the same netlist with the pin tied differs', () => {
    const { circuit, chains } = read(NETLIST)
    expect(chains.map((chain) => chain.cells.map((cell) => cell.instance))).toEqual([['f0', 'f1']])
    const patterns = randomPatterns(circuit, 128, 7)
    const faults = buildFaultList(circuit)
    const task = { circuit, faults, patterns, detectionLimit: 1, classes: null, wantMatrix: false }
    const first = simulateTwin(task)?.profile.first
    const good = simulateGood(circuit, patterns)
    let compared = 0
    for (let row = 0; row < faults.lines.n; row++) {
      const [instance, pin] = faults.lines.nameOf(row).split('.')
      const pattern = new RegExp(`(\\b${instance} \\([^;]*\\.${pin}\\()[^)]*\\)`)
      if (faults.lines.byChainTest[row] === 1 || !pattern.test(NETLIST)) continue
      if (['Y', 'S', 'CO', 'Q', 'QN'].includes(pin) && !(instance === 'm' && pin === 'S')) continue
      for (const stuck of [0, 1]) {
        const tied = read(NETLIST.replace(pattern, `$1 1'b${stuck})`)).circuit
        const faulty = simulateGood(tied, patterns)
        const differs = faulty.one.words.findIndex((word, at) => word !== good.one.words[at]) >= 0
        const detected = (first?.[faults.classOf[2 * row + stuck]] ?? -1) >= 0
        expect([faults.lines.nameOf(row), stuck, detected]).toEqual([
          faults.lines.nameOf(row),
          stuck,
          differs,
        ])
        compared++
      }
    }
    expect(compared).toBe(2 * (2 + 3 + 3 + 3))
  })

  // SOURCE: the base "cell pins": every pin of every instance that is no supply, two faults each.
  test('every pin of every instance is a line, open outputs too', () => {
    const { circuit, report } = read(NETLIST)
    const { lines, base } = buildFaultList(circuit)
    expect([base, lines.n, report.lines]).toEqual(['cell pins', 7 + 7 + 4 + 5 + 4, 27])
    expect(lines.nameOf(0)).toBe('f0.CK')
    expect(lines.nameOf(26)).toBe('ao.Y')
  })

  // SOURCE: the scan path is exercised by the chain test (common practice, no source).
  test('pins of the scan path are by the chain test, and so is what feeds nothing else', () => {
    const text = NETLIST.replaceAll('.CK(ck)', '.CK(ckb)')
      .replace('.Q(so)', '.Q(q1)')
      .replace('.CI(so)', '.CI(q1)')
      .replace(
        'MX m',
        'BF bc (.A(ck), .Y(ckb));\n  BF bs (.A(q1), .Y(so));\n  BF bn (.A(q0), .Y(open));\n  MX m',
      )
    const { circuit, chains } = read(text)
    expect(chains[0]?.scanOut).toBe('so')
    const { lines } = buildFaultList(circuit)
    const byChain = Array.from({ length: lines.n }, (_, row) => row).filter(
      (row) => lines.byChainTest[row] === 1,
    )
    expect(byChain.map((row) => lines.nameOf(row))).toEqual([
      ...['CK', 'RN', 'SI', 'SE'].map((pin) => `f0.${pin}`),
      ...['CK', 'RN', 'SI', 'SE'].map((pin) => `f1.${pin}`),
      ...['bc.A', 'bc.Y', 'bs.A', 'bs.Y'],
    ])
    expect(lines.kind[0]).toBe(LineKind.Outside)
  })
})
