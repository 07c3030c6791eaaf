import { readNetlistFiles, type NetlistOfFiles } from '../services/on-files/read-netlist-files.ts'
import { UsageError } from './arguments.ts'
import { ExitCode, type Command } from './command.ts'
import { NETLIST_DETAILS, NETLIST_OPTIONS, netlistArguments } from './netlist-arguments.ts'
import { JSON_OPTION, printJson } from './print-json.ts'
import { aligned, formats, printText } from './print-text.ts'

export const circuit: Command = {
  usage: ['NETLIST [--library LIB…] [--top NAME] [--json]'],
  options: { ...NETLIST_OPTIONS, ...JSON_OPTION },
  details: () => [NETLIST_DETAILS],
  examples: ['assets/demo/fern.bench', 'chip.v --library cells.lib --top chip --json'],
  async run(args, terminal, { stdout }) {
    const { netlist, others } = netlistArguments(args)
    if (others.length > 0) throw new UsageError(`"${others[0]}" has no place here: one netlist is read.`)
    const read = await readNetlistFiles(netlist, [], terminal)
    terminal.clear()
    if (args.has('json')) printJson({ ...circuitJson(read), warnings: terminal.warnings }, stdout)
    else printText(circuitText(read), stdout)
    return ExitCode.Done
  },
}

/** What JSON says of a netlist and its faults. */
export function circuitJson({ netlist: { circuit, chains, report }, faults }: NetlistOfFiles): object {
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
      unknownSources: report.unusable.map(({ kind, count, examples }) => ({ kind, count, examples })),
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

/** The same for people. */
export function circuitText({ netlist: { circuit, chains, report }, faults }: NetlistOfFiles): string {
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
    rows.push(['Source of X', `${count(number).value} × ${kind}: ${examples.slice(0, 3).join(', ')}`])
  }
  return aligned(rows)
}
