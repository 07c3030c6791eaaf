import { CircuitBuilder } from '../../app/engine/circuit/circuit-builder.ts'
import { GateKind, type Circuit } from '../../app/engine/circuit/circuit.ts'
import type { Netlist } from '../../app/engine/circuit/netlist.ts'
import { createRandom } from '../../app/engine/source/random.ts'

/** The size of a made-up scan design: nothing in it follows a real one. */
export type ScanDesign = {
  readonly inputs: number
  readonly outputs: number
  readonly chains: number
  readonly chainLength: number
}

/** Returns a netlist of that size in which every flip-flop captures its neighbour in the chain, inverted or not. */
export function generateScanNetlist(design: ScanDesign): Netlist {
  const { inputs, outputs, chains, chainLength } = design
  const builder = new CircuitBuilder()
  for (let at = 0; at < inputs; at++) builder.drive(builder.net(`in${at}`), GateKind.Input)
  const flipFlops = chains * chainLength
  for (let at = 0; at < flipFlops; at++) {
    builder.drive(builder.net(`ff${at}`), GateKind.FlipFlop, [builder.net(`d${at}`)])
    const kind = at % 3 === 0 ? GateKind.Not : GateKind.Buffer
    builder.drive(builder.net(`d${at}`), kind, [builder.net(`ff${(at + 1) % flipFlops}`)])
  }
  for (let at = 0; at < outputs; at++) {
    builder.drive(builder.net(`out${at}`), GateKind.Buffer, [builder.net(`in${at % inputs}`)])
    builder.observe(builder.net(`out${at}`))
  }
  return {
    circuit: builder.finish('generated') as Circuit,
    chains: Array.from({ length: chains }, (_, chain) => ({
      name: `chain${chain}`,
      scanIn: `si${chain}`,
      scanOut: `so${chain}`,
      cells: Array.from({ length: chainLength }, (_, cell) => ({
        flipFlop: chain * chainLength + cell,
        instance: `ff${chain * chainLength + cell}`,
        loadInverted: false,
        unloadInverted: false,
      })),
    })),
    report: {
      format: 'generated',
      top: 'generated',
      gates: flipFlops + outputs,
      flipFlops,
      lines: 0,
      cellsUsed: [],
      cellsUnknown: [],
      unusable: [],
      testPins: [],
    },
  }
}

/** Yields the text of a STIL file of about `bytes` for that design, with random data from the seed, in parts. */
export function* generateStil(
  design: ScanDesign,
  bytes: number,
  seed: number,
): Generator<string, void, undefined> {
  const { inputs, outputs, chains, chainLength } = design
  const random = createRandom(seed)
  const bits = (length: number, zero: string, one: string): string => {
    let text = ''
    for (let at = 0; at < length; at += 30) {
      const run = (random.bits() >>> 2)
        .toString(2)
        .padStart(30, '0')
        .slice(0, Math.min(30, length - at))
      text += zero === '0' ? run : run.replace(/0/g, zero).replace(/1/g, one)
    }
    return text
  }
  const list = (name: string, count: number): string[] =>
    Array.from({ length: count }, (_, at) => `${name}${at}`)
  const group = (names: string[]): string => `'${names.join(' + ')}'`
  const [ins, outs, sis, sos] = [
    list('in', inputs),
    list('out', outputs),
    list('si', chains),
    list('so', chains),
  ]
  yield `STIL 1.0;
Signals { clk In; se In; ${[...ins, ...sis].map((name) => `${name} In;`).join(' ')} ${[...outs, ...sos].map((name) => `${name} Out;`).join(' ')} }
SignalGroups { pi = ${group(ins)}; po = ${group(outs)}; si = ${group(sis)} { ScanIn; } so = ${group(sos)} { ScanOut; } }
Timing { WaveformTable t { Period '100ns'; Waveforms {
  clk { 0P { '0ns' D; '50ns' D/U; '80ns' D; } }
  'se + pi + si' { 01 { '0ns' D/U; } }
  'po + so' { LHX { '0ns' X; '40ns' L/H/X; } }
} } }
ScanStructures {
${sis.map((si, at) => `  ScanChain chain${at} { ScanLength ${chainLength}; ScanIn ${si}; ScanOut so${at}; }`).join('\n')}
}
PatternBurst b { PatList { p; } }
PatternExec { PatternBurst b; }
Procedures {
  load_unload { W t; C { clk=0; se=1; } Shift { V { clk=P; si=\\r${chains} #; so=\\r${chains} #; } } }
  capture { W t; V { clk=P; se=0; pi=\\r${inputs} #; po=\\r${outputs} #; } }
}
Pattern p { W t;
`
  let written = 0
  for (let pattern = 0; written < bytes; pattern++) {
    const unload = pattern === 0 ? [] : sos.map((so) => `${so}=${bits(chainLength, 'L', 'H')};`)
    const load = sis.map((si) => `${si}=${bits(chainLength, '0', '1')};`)
    const text = `Call load_unload {\n${[...unload, ...load].join('\n')} }
Call capture { pi=${bits(inputs, '0', '1')}; po=${bits(outputs, 'L', 'H')}; }
`
    written += text.length
    yield text
  }
  yield `Call load_unload {\n${sos.map((so) => `${so}=${bits(chainLength, 'L', 'H')};`).join('\n')} }\n}\n`
}
