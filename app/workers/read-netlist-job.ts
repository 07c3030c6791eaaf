import type { NetlistAccount } from '../contract/shapes/netlist.ts'
import type { DiagnosticView } from '../contract/shapes/diagnostic.ts'
import type { Netlist } from '../engine/circuit/netlist.ts'
import { buildFaultList } from '../engine/faults/build-fault-list.ts'
import type { Source } from '../engine/source/source.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { DeskContext } from './desk-context.ts'
import { diagnosticViews } from './diagnostic-views.ts'
import { readNetlistInput, type NetlistInput } from './load-netlist.ts'

export type ReadNetlistJob = {
  readonly input: NetlistInput
  readonly output: {
    readonly account: NetlistAccount | null
    readonly diagnostics: readonly DiagnosticView[]
  }
  readonly part: never
}

/** Reads a netlist to tell what is in it. */
export async function readNetlistJob(
  input: NetlistInput,
  context: DeskContext<never>,
): Promise<DeskAnswer<ReadNetlistJob['output']>> {
  const { sources, libraries, reading } = await readNetlistInput(input, (done, total) => {
    context.report({ phase: 'Reading the netlist', share: total > 0 ? Math.min(1, done / total) : null })
    return !context.isCancelled()
  })
  context.report({ phase: 'Listing faults', share: null })
  const account = reading.value === null ? null : accountOf(reading.value, input, sources)
  return new DeskAnswer({
    account,
    diagnostics: diagnosticViews(reading.diagnostics, [...sources, ...libraries]),
  })
}

function accountOf(netlist: Netlist, input: NetlistInput, sources: readonly Source[]): NetlistAccount {
  const { circuit, report, chains } = netlist
  const { base, nFaults, nClasses, lines } = buildFaultList(circuit)
  return {
    format: report.format,
    top: report.top,
    tops: report.format === 'verilog' ? moduleNames(sources).filter((name) => name !== report.top) : [],
    inputs: circuit.inputs.length,
    outputs: circuit.outputs.length,
    flipFlops: circuit.flipFlops.length,
    gates: report.gates,
    nets: circuit.nNets,
    lines: lines.n,
    base,
    faults: nFaults,
    collapsedFaults: nClasses,
    chains: chains.map(({ name, scanIn, scanOut, cells }) => ({
      name,
      scanIn,
      scanOut,
      length: cells.length,
    })),
    cellsUsed: [...report.cellsUsed],
    cellsUnknown: [...report.cellsUnknown],
    unusable: report.unusable.map(({ kind, count, examples }) => ({ kind, count, examples: [...examples] })),
    testPins: [...report.testPins],
    assumeScanned: input.assumeScanned,
  }
}

/** The modules that the files define, by their keyword at the start of a line; enough to offer them as the top. */
function moduleNames(sources: readonly Source[]): string[] {
  const names = new Set<string>()
  for (const { text } of sources) {
    for (const match of text.matchAll(/^[ \t]*module[ \t]+(\\\S+|[A-Za-z_][\w$]*)/gm)) {
      names.add((match[1] ?? '').replace(/^\\/, ''))
    }
  }
  return [...names]
}
