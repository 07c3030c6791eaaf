import { textOf } from '../contract/format-number.ts'
import type { UnusableCosts } from '../engine/simulate/unusable-cost.ts'
import { readNetlistFiles, type NetlistOfFiles } from '../services/on-files/read-netlist-files.ts'
import { estimateUnusableCosts } from '../workers/estimate-unusable-costs.ts'
import { type Arguments, UsageError } from './arguments.ts'
import { ExitCode, type Command } from './command.ts'
import type { Io } from './io.ts'
import { NETLIST_DETAILS, NETLIST_OPTIONS, netlistArguments } from './netlist-arguments.ts'
import { JSON_OPTION, printJson } from './print-json.ts'
import { aligned, formats, printText } from './print-text.ts'
import { simulatorOf } from './simulator-of.ts'
import type { Terminal } from './terminal.ts'

export const circuit: Command = {
  usage: ['NETLIST [--library LIB…] [--top NAME] [--json]'],
  options: { ...NETLIST_OPTIONS, ...JSON_OPTION },
  details: () => [NETLIST_DETAILS],
  examples: ['assets/demo/fern.bench', 'chip.v --library cells.lib --top chip --json'],
  async run(args, terminal, io) {
    const { netlist, others } = netlistArguments(args)
    if (others.length > 0) throw new UsageError(`"${others[0]}" has no place here: one netlist is read.`)
    const read = await readNetlistFiles(netlist, [], terminal)
    const costs = await costsOf(read, args, terminal, io)
    terminal.clear()
    if (args.has('json')) printJson({ ...circuitJson(read, costs), warnings: terminal.warnings }, io.stdout)
    else printText(circuitText(read, costs), io.stdout)
    return ExitCode.Done
  },
}

async function costsOf(
  read: NetlistOfFiles,
  args: Arguments,
  terminal: Terminal,
  io: Io,
): Promise<UnusableCosts | null> {
  if (read.netlist.report.unusable.length === 0) return null
  const simulator = simulatorOf(args, io)
  try {
    return await estimateUnusableCosts(read, async (task) => (await simulator.run(task, terminal)).result)
  } finally {
    simulator.close()
  }
}

/** What JSON says of a netlist and its faults; with what its sources of X cost, where that was estimated. */
export function circuitJson(
  { netlist: { circuit, chains, report }, faults }: NetlistOfFiles,
  costs: UnusableCosts | null = null,
): object {
  return {
    circuit: {
      name: circuit.name,
      inputs: circuit.inputs.length,
      outputs: circuit.outputs.length,
      flipFlops: circuit.flipFlops.length,
      gates: report.gates,
      nets: circuit.nNets,
      lines: faults.lines.n,
      format: report.format,
      chains: chains.map(({ name, scanIn, scanOut, cells }) => ({
        name,
        scanIn,
        scanOut,
        length: cells.length,
      })),
      testPins: report.testPins,
      unknownSources: report.unusable.map(({ kind, count, examples }) => ({
        kind,
        count,
        examples,
        ...(costs === null ? {} : { coverageCost: costOf(costs, kind) }),
      })),
      ...(costs === null
        ? {}
        : {
            unknownSourcesCost: {
              patterns: costs.nPatterns,
              seed: costs.seed,
              faults: costs.faults,
              coverage: costs.coverage,
              together: costs.together,
            },
          }),
      cellsUnknown: report.cellsUnknown,
    },
    faults: {
      model: 'stuck-at',
      base: faults.base,
      total: faults.nFaults,
      collapsed: faults.nClasses,
    },
  }
}

function costOf({ kinds }: UnusableCosts, kind: string): number {
  return kinds.find((each) => each.kind === kind)?.coverage ?? 0
}

/** The same for people. */
export function circuitText(
  { netlist: { circuit, chains, report }, faults }: NetlistOfFiles,
  costs: UnusableCosts | null = null,
): string {
  const { count } = formats
  const rows: [string, string][] = [
    ['Circuit', circuit.name],
    ['Inputs, outputs', `${count(circuit.inputs.length).value}, ${count(circuit.outputs.length).value}`],
    ['Flip-flops', count(circuit.flipFlops.length).value],
    ['Gates', count(report.gates).value],
    ['Nets', count(circuit.nNets).value],
    [faults.base === 'lines' ? 'Lines' : 'Cell pins', count(faults.lines.n).value],
    [
      'Stuck-at faults',
      `${count(faults.nFaults).value} on ${faults.base}, ${count(faults.nClasses).value} collapsed`,
    ],
  ]
  for (const { name, scanIn, scanOut, cells } of chains) {
    rows.push(['Scan chain', `${name}: ${count(cells.length).value} flip-flops from ${scanIn} to ${scanOut}`])
  }
  for (const { name, role, value, from } of report.testPins) {
    rows.push(['Held in test', `${name} = ${value} (${role}, from the ${from})`])
  }
  for (const { kind, count: number, examples } of report.unusable) {
    const cost =
      costs === null ? '' : `, costs about ${textOf(formats.coverage(costOf(costs, kind)))} of coverage`
    rows.push(['Source of X', `${count(number).value} × ${kind}: ${examples.slice(0, 3).join(', ')}${cost}`])
  }
  if (costs !== null) {
    const { coverage, together, nPatterns } = costs
    rows.push([
      'Estimate',
      `${count(nPatterns).value} random patterns detect ${textOf(formats.coverage(coverage))} of the faults as it is, ${textOf(formats.coverage(coverage + together))} with none of this unknown`,
    ])
  }
  return aligned(rows)
}
