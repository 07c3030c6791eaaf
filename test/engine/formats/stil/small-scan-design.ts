import { CircuitBuilder } from '../../../../app/engine/circuit/circuit-builder.ts'
import { GateKind, type Circuit } from '../../../../app/engine/circuit/circuit.ts'
import type { Netlist, ScanCell, TestPin } from '../../../../app/engine/circuit/netlist.ts'

export type SmallDesignOptions = {
  /** Cells in shift order; by default F1, F2, F3 without inversions. */
  readonly cells?: readonly ScanCell[]
  readonly hasChain?: boolean
  readonly clocks?: Netlist['clocks']
  readonly testPins?: readonly TestPin[]
}

const CELLS: readonly ScanCell[] = ['F1', 'F2', 'F3'].map((instance, flipFlop) => ({
  instance,
  flipFlop,
  loadInverted: false,
  unloadInverted: false,
}))

/**
 * Two inputs, three flip-flops, two outputs, worked by hand in the tests: Y = A and B, Z = F3; the next state of F1 is A,
 * of F2 is not F1, of F3 is F2 xor B. Rows of patterns: A, B, F1, F2, F3; of responses: Y, Z, F1, F2, F3.
 */
export function smallScanDesign(options: SmallDesignOptions = {}): Netlist {
  const builder = new CircuitBuilder()
  const net = (name: string): number => builder.net(name)
  builder.drive(net('A'), GateKind.Input)
  builder.drive(net('B'), GateKind.Input)
  builder.drive(net('F1'), GateKind.FlipFlop, [net('A')])
  builder.drive(net('F2'), GateKind.FlipFlop, [net('n1')])
  builder.drive(net('F3'), GateKind.FlipFlop, [net('n2')])
  builder.drive(net('n1'), GateKind.Not, [net('F1')])
  builder.drive(net('n2'), GateKind.Xor, [net('F2'), net('B')])
  builder.drive(net('Y'), GateKind.And, [net('A'), net('B')])
  builder.drive(net('Z'), GateKind.Buffer, [net('F3')])
  builder.observe(net('Y'))
  builder.observe(net('Z'))
  const { cells = CELLS, hasChain = true, clocks, testPins = [] } = options
  return {
    circuit: builder.finish('small') as Circuit,
    chains: hasChain ? [{ name: 'c1', scanIn: 'SI', scanOut: 'SO', cells }] : [],
    ...(clocks === undefined ? {} : { clocks }),
    report: {
      format: 'by hand',
      top: 'small',
      gates: 4,
      flipFlops: 3,
      lines: 0,
      cellsUsed: [],
      cellsUnknown: [],
      unusable: [],
      testPins,
    },
  }
}

/** A STIL file for that design around the statements of its pattern; parts may be replaced. */
export function smallStil(
  pattern: string,
  parts: {
    signals?: string
    waveforms?: string
    structures?: string
    procedures?: string
    before?: string
  } = {},
): string {
  const {
    signals = 'CK In; SE In; SI In; A In; B In; Y Out; Z Out; SO Out;',
    waveforms = `CK { 01P { '0ns' D/U/D; '50ns' D/U/U; '80ns' D/U/D; } }
      'SE + SI + A + B' { 01NZ { '0ns' D/U/N/Z; } }
      outs { LHXT { '0ns' X; '40ns' L/H/X/T; } }`,
    structures = 'ScanChain c1 { ScanLength 3; ScanIn SI; ScanOut SO; ScanCells F1 F2 F3; }',
    procedures = `load { W t; C { CK=0; SE=1; } Shift { V { CK=P; SI=#; SO=#; } } }
    capture { W t; V { CK=P; SE=0; pi=##; po=##; } }
    look { W t; V { CK=0; SE=0; pi=##; po=##; } }`,
    before = '',
  } = parts
  return `STIL 1.0;
Signals { ${signals} }
SignalGroups { pi = 'A + B'; po = 'Y + Z'; outs = 'po + SO'; }
Timing { WaveformTable t { Period '100ns'; Waveforms { ${waveforms} } } }
ScanStructures { ${structures} }
PatternBurst all { PatList { p; } }
PatternExec { PatternBurst all; }
${before}
Procedures { ${procedures} }
Pattern p { W t; ${pattern} }
`
}
