import { textOf } from '../contract/format-number.ts'
import type { ResponseComparison } from '../engine/simulate/compare-response.ts'
import { detectedAfter } from '../engine/simulate/detected-after.ts'
import { csvRow } from '../report/csv-row.ts'
import { faultRows } from '../services/on-files/fault-rows.ts'
import { readRunFiles, simulateFiles, type CoverageRun } from '../services/on-files/coverage-of-files.ts'
import { UsageError, type Arguments } from './arguments.ts'
import { circuitJson, circuitText } from './circuit.ts'
import { ExitCode, type Command, type OptionTable } from './command.ts'
import { NETLIST_DETAILS, NETLIST_OPTIONS, netlistArguments } from './netlist-arguments.ts'
import { JSON_OPTION, printJson } from './print-json.ts'
import { aligned, formats, printText } from './print-text.ts'
import { simulatorOf } from './simulator-of.ts'
import type { Terminal } from './terminal.ts'
import { checkOutput, writeFile } from './write-file.ts'

/** How many mismatches are shown to people, and listed in JSON. */
const MISMATCHES_SHOWN = 5
const MISMATCHES_LISTED = 50

const OPTIONS = {
  ...NETLIST_OPTIONS,
  threads: { value: 'N', help: 'threads that simulate; as many as there are processors where not said' },
  detections: {
    value: 'N|all',
    help: 'stop simulating a fault after so many detections (default 1); all counts every one',
  },
  faults: { value: 'FILE.csv', help: 'write every fault, one a row: fault,state,first_pattern,detections' },
  curve: { value: 'FILE.csv', help: 'write the curve, one pattern a row: pattern,detected,coverage' },
  ...JSON_OPTION,
} as const satisfies OptionTable

export const coverage: Command = {
  usage: ['NETLIST PATTERNS… [--detections N|all] [--faults FILE.csv] [--curve FILE.csv] [--json]'],
  options: OPTIONS,
  details: () => [
    NETLIST_DETAILS,
    'PATTERNS are vectors (one pattern a line), CSV or STIL files; several are applied one after the other.\n' +
      'Values that they expect are compared with the fault-free circuit; differences are warned of.',
    'JSON: circuit, faults, patterns, detected, coverage (0 to 1, of all faults, uncollapsed), curve, seconds,\n' +
      'pairsPerSecond (uncollapsed faults × patterns by the seconds of the simulation alone).',
  ],
  examples: [
    'assets/demo/fern.bench assets/demo/fern-a.vec',
    'chip.v patterns.stil --library cells.lib --faults faults.csv --json',
    'chip.bench one.vec two.vec.gz --detections all --curve curve.csv',
  ],
  async run(args, terminal, io) {
    const { netlist, others: patterns } = netlistArguments(args)
    if (patterns.length === 0) throw new UsageError('Pattern files are needed after the netlist.')
    const inputs = [...netlist.netlist, ...netlist.libraries, ...patterns]
    for (const option of ['faults', 'curve'] as const) {
      const path = args.text(option)
      if (path !== null) await checkOutput(option, path, inputs)
    }
    const detectionLimit = detectionsOf(args)
    const simulator = simulatorOf(args, io)
    try {
      const files = await readRunFiles(netlist, patterns, terminal)
      const run = await simulateFiles(files, { detectionLimit, wantMatrix: false }, simulator, terminal)
      terminal.clear()
      warnOfMismatches(run, terminal)
      const curve = Array.from(detectedAfter(run.faults, run.result.profile).subarray(1))
      const faultsFile = args.text('faults')
      if (faultsFile !== null) await writeFile(faultsFile, faultRows(run.faults, run.result.profile))
      const curveFile = args.text('curve')
      if (curveFile !== null) await writeFile(curveFile, curveRows(curve, run.faults.nFaults))
      if (args.has('json')) printJson({ ...coverageJson(run, curve), warnings: terminal.warnings }, io.stdout)
      else printText(coverageText(run), io.stdout)
      return ExitCode.Done
    } finally {
      simulator.close()
    }
  },
}

/** The detections after which a fault is left alone; 0 for never. */
function detectionsOf(args: Arguments): number {
  if (args.text('detections') === 'all') return 0
  return (
    args.number('detections', {
      least: 1,
      most: 65_535,
      whole: true,
      what: 'a whole number from 1, or all',
    }) ?? 1
  )
}

/** What JSON says of a netlist under its patterns. */
export function coverageJson(run: CoverageRun, curve: readonly number[]): object {
  const { faults, patterns, report, states, readSeconds, simulateSeconds, comparison } = run
  const { nPatterns } = patterns
  return {
    ...circuitJson(run),
    patterns: {
      count: nPatterns,
      bursts: patterns.bursts.map(({ name, count }) => ({ name, patterns: count })),
      timeOnly: patterns.timeOnly?.reduce((sum, flag) => sum + flag, 0) ?? 0,
      signalsUnmatched: report?.signals.unmatched ?? [],
    },
    detected: {
      total: states.detected,
      collapsed: states.collapsedDetected,
      possibly: states.possibly,
      byChainTest: states.byChainTest,
    },
    coverage: faults.nFaults > 0 ? states.detected / faults.nFaults : 0,
    curve,
    seconds: { read: readSeconds, simulate: simulateSeconds },
    pairsPerSecond: pairsPerSecond(run),
    expected: comparison === null ? null : expectedJson(comparison),
  }
}

function expectedJson({ total, first }: ResponseComparison): object {
  return {
    ...total,
    first: first.slice(0, MISMATCHES_LISTED).map(({ pattern, name, chain, expected }) => ({
      pattern: pattern + 1,
      output: name,
      chain,
      expected: expected === 1 ? 'H' : 'L',
      simulated: expected === 1 ? 'L' : 'H',
    })),
  }
}

/** Tells where expected values differ from the fault-free circuit: the patterns may belong to another netlist. */
export function warnOfMismatches({ comparison, patterns }: CoverageRun, terminal: Terminal): void {
  if (comparison === null || comparison.total.mismatches === 0) return
  const { total, first, byPattern } = comparison
  const { count } = formats
  const wrong = byPattern.reduce((sum, mismatches) => sum + (mismatches > 0 ? 1 : 0), 0)
  const rows = first.slice(0, MISMATCHES_SHOWN).map(({ pattern, name, chain, expected }) => {
    const place = chain === null ? name : `${name} (chain ${chain.name}, cell ${chain.cell + 1})`
    return `  pattern ${pattern + 1}, ${place}: expected ${expected}, simulated ${1 - expected}`
  })
  terminal.warn(
    `${count(total.mismatches).value} of ${count(total.compared).value} expected values differ from the fault-free circuit, ` +
      `in ${count(wrong).value} of ${count(patterns.nPatterns).value} patterns. ` +
      `Do the patterns belong to another netlist revision?\n${rows.join('\n')}`,
  )
}

function* curveRows(curve: readonly number[], nFaults: number): Generator<string, void, undefined> {
  yield csvRow(['pattern', 'detected', 'coverage'], '\n')
  for (const [at, detected] of curve.entries()) {
    yield csvRow([at + 1, detected, nFaults > 0 ? detected / nFaults : 0], '\n')
  }
}

/** The same for people. */
export function coverageText(run: CoverageRun): string {
  const { faults, patterns, states, readSeconds, simulateSeconds } = run
  const { count, coverage: share, duration } = formats
  const { nFaults, nClasses } = faults
  const rows: [string, string][] = [
    ['Patterns', count(patterns.nPatterns).value],
    [
      'Detected',
      `${count(states.detected).value} of ${count(nFaults).value} faults; collapsed ${count(states.collapsedDetected).value} of ${count(nClasses).value}`,
    ],
    [
      'Fault coverage',
      `${textOf(share(nFaults > 0 ? states.detected / nFaults : 0))} of all faults on ${faults.base}, uncollapsed`,
    ],
  ]
  if (states.possibly > 0)
    rows.push(['Possibly detected', `${count(states.possibly).value} faults, which earn no credit`])
  if (states.byChainTest > 0) rows.push(['By the chain test', `${count(states.byChainTest).value} faults`])
  rows.push([
    'Time',
    `read ${textOf(duration(readSeconds))}, simulated ${simulateSeconds.toFixed(3)} s (${pairsPerSecond(run).toExponential(2)} faults × patterns a second)`,
  ])
  return `${circuitText(run)}\n${aligned(rows)}`
}

/** Uncollapsed faults × patterns by the seconds of the simulation alone. */
function pairsPerSecond({ faults, patterns, simulateSeconds }: CoverageRun): number {
  return simulateSeconds > 0 ? (faults.nFaults * patterns.nPatterns) / simulateSeconds : 0
}
