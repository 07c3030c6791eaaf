import { AppError } from '../contract/errors.ts'
import type { NetlistAccount } from '../contract/shapes/netlist.ts'
import type { DiagnosticView } from '../contract/shapes/diagnostic.ts'
import type { Netlist } from '../engine/circuit/netlist.ts'
import { buildFaultList } from '../engine/faults/build-fault-list.ts'
import type { Source } from '../engine/source/source.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { DeskContext } from './desk-context.ts'
import { deskPool } from './desk-pool.ts'
import { diagnosticViews } from './diagnostic-views.ts'
import { estimateUnusableCosts } from './estimate-unusable-costs.ts'
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
  const account = reading.value === null ? null : await accountOf(reading.value, input, sources, context)
  return new DeskAnswer({
    account,
    diagnostics: diagnosticViews(reading.diagnostics, [...sources, ...libraries]),
  })
}

async function accountOf(
  netlist: Netlist,
  input: NetlistInput,
  sources: readonly Source[],
  context: DeskContext<never>,
): Promise<NetlistAccount> {
  const { circuit, report, chains } = netlist
  const faults = buildFaultList(circuit)
  const { base, nFaults, nClasses, lines } = faults
  const costs = await estimateUnusableCosts({ netlist, faults }, async (task) => {
    context.report({ phase: 'Estimating what sources of X cost', share: null })
    const outcome = await (await deskPool(context.threads)).run(task, { signal: context.signal })
    if (outcome.state === 'cancelled') throw new AppError('cancelled')
    return outcome.result
  })
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
    unusableCosts: costs === null ? null : { ...costs, kinds: [...costs.kinds] },
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
