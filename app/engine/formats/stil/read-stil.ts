import type { Netlist, TestPin } from '../../circuit/netlist.ts'
import type { PatternBurst, PatternSet } from '../../simulate/pattern-set.ts'
import type { Reading } from '../../source/diagnostic.ts'
import { quoted } from '../../source/finding-list.ts'
import type { ReadingProgress } from '../../source/reading-progress.ts'
import type { Source } from '../../source/source.ts'
import { PatternAssembler, type AssemblyCounts } from './assemble-patterns.ts'
import { matchNetlist, type PinMap } from './match-netlist.ts'
import { readBlocks, type Include } from './read-blocks.ts'
import { PatternRunner } from './run-patterns.ts'
import { SignalNames } from './signal-names.ts'
import { BrokenStatement, ReadingStopped, StilFindings } from './stil-findings.ts'
import type { Place, StilFile } from './stil-file.ts'
import { buildStilReport, type StilReport } from './stil-report.ts'

export type StilReading = {
  readonly patterns: PatternSet
  readonly report: StilReport
}

/** What a file says of time and memory without a netlist. */
export type StilSurvey = {
  readonly report: StilReport
  readonly bursts: readonly PatternBurst[]
  /** Tester cycles of each pattern. */
  readonly cycles: Uint32Array
}

export type StilOptions = {
  readonly include?: Include
  readonly onProgress?: ReadingProgress
}

/**
 * Reads a STIL file (IEEE 1450-1999; clause numbers here and in the files beside it are from memory) as a pattern set of
 * that netlist. Loads become the values of the flip-flops, each
 * unload the expected values of the pattern before it, masks take away what is observed, and cycles are counted as the
 * tester runs them. Patterns that one time frame can't show right count for time alone, and the report says why.
 * No value where the file has errors, names no signal of the netlist, or was cancelled.
 */
export function readStil(source: Source, netlist: Netlist, options: StilOptions = {}): Reading<StilReading> {
  const run = runStil(source, netlist, options, Infinity)
  const patterns = run.complete && !run.findings.hasErrors ? run.assembler?.finish() : null
  const diagnostics = run.findings.finish()
  if (!patterns || run.report === null) return { value: null, diagnostics }
  return { value: { patterns, report: run.report(patterns) }, diagnostics }
}

/** Reads a STIL file for what it tells without a netlist: signals, chains, test pins, patterns, cycles and time. */
export function surveyStil(source: Source, options: StilOptions = {}): Reading<StilSurvey> {
  const run = runStil(source, null, options, Infinity)
  const patterns = run.complete && !run.findings.hasErrors ? run.assembler?.finish() : null
  const diagnostics = run.findings.finish()
  if (!patterns || run.report === null) return { value: null, diagnostics }
  const { bursts, cycles } = patterns
  return {
    value: { report: run.report(patterns), bursts, cycles: cycles ?? new Uint32Array(0) },
    diagnostics,
  }
}

/** How many patterns are looked at to tell which pins hold still: enough that random data would not. */
const PATTERNS_FOR_PINS = 256

/**
 * Proposes the test pins among those ports, from the first patterns of the file: clocks at rest, pins that pulse but not
 * in shift as resets, scan enables that shift at one value and capture at the other, scan-ins, and pins that hold one
 * value throughout. Empty where the file can't be read; reading it says why.
 */
export function proposeTestPins(
  source: Source,
  ports: Iterable<string>,
  options: StilOptions = {},
): TestPin[] {
  const run = runStil(source, null, options, PATTERNS_FOR_PINS)
  const patterns = run.assembler?.finish()
  if (!patterns || run.report === null) return []
  const wanted = new Set(ports)
  return run.report(patterns).testPins.filter(({ name }) => wanted.has(name))
}

type StilRun = {
  readonly findings: StilFindings
  readonly assembler: PatternAssembler | null
  /** False where the reading was cancelled or gave up. */
  readonly complete: boolean
  readonly report: ((patterns: PatternSet) => StilReport) | null
}

function runStil(
  source: Source,
  netlist: Netlist | null,
  options: StilOptions,
  maxPatterns: number,
): StilRun {
  const findings = new StilFindings()
  let assembler: PatternAssembler | null = null
  try {
    const file = readBlocks(source, options.include ?? (() => null), findings)
    if (findings.hasErrors) return { findings, assembler, complete: false, report: null }
    const names = new SignalNames(file, findings)
    markScanSignals(file, names)
    const pins = matchNetlist(file, names, netlist, findings)
    const start = { source, span: { start: 0, end: Math.min(4, source.text.length) } }
    if (!checkSignals(file, pins, netlist, source, findings)) {
      return { findings, assembler, complete: false, report: null }
    }
    assembler = new PatternAssembler(pins, file.signals.names.length, maxPatterns)
    const runner = new PatternRunner(file, names, findings, assembler, start, options.onProgress)
    assembler.attach(runner)
    runner.run()
    if (assembler.nPatterns === 0 && !findings.hasErrors) {
      findings.report(
        'no-patterns',
        source,
        start.span,
        'the file applies no pattern: nothing is loaded and nothing compared',
        'Expected a PatternExec, its PatternBurst and Pattern blocks with V, Call or Macro.',
      )
    }
    const { counts } = runner
    const { counts: assembly } = assembler
    if (!findings.hasErrors) warnOfLosses(assembly, file, pins, netlist, start, findings)
    return {
      findings,
      assembler,
      complete: true,
      report: (patterns) =>
        buildStilReport({ file, names, netlist, pins, patterns, counts, assembly, findings }),
    }
  } catch (reason) {
    if (!(reason instanceof ReadingStopped) && !(reason instanceof BrokenStatement)) throw reason
    return { findings, assembler, complete: false, report: null }
  }
}

/** Warnings of what makes coverage lower than the patterns might give, each once for the file. */
function warnOfLosses(
  assembly: AssemblyCounts,
  file: StilFile,
  pins: PinMap,
  netlist: Netlist | null,
  { source, span }: Place,
  findings: StilFindings,
): void {
  for (const [chain, { found, expected, place }] of assembly.wrongLengths) {
    const message = `chain ${quoted(chain)} has ${expected} cells and is loaded with ${found} characters; cells without one are X`
    findings.caution('width-mismatch', place.source, place.span, `load ${chain}`, message)
  }
  if (netlist === null) return
  for (const [reason, { count, first }] of assembly.timeOnly) {
    const message = `${plural(count)} for time alone, not for coverage: ${reason}; the first is pattern ${first + 1}`
    findings.caution('ignored', source, span, reason, message)
  }
  if (assembly.stateNotLoaded > 0 && pins.nFlipFlops > 0) {
    const message = `no load in ${assembly.stateNotLoaded} patterns: the ${pins.nFlipFlops} flip-flops are taken as X there, so that coverage can only come out too low`
    findings.caution('not-scanned', source, span, 'state', message)
  }
  if (assembly.inputsWithoutValue.size > 0) {
    const message = `no value for ${assembly.inputsWithoutValue.size} inputs when patterns capture: ${list(Array.from(assembly.inputsWithoutValue, (signal) => file.signals.names[signal] ?? ''))}; they are taken as X`
    findings.caution('missing-signal', source, span, 'values', message)
  }
}

function plural(count: number): string {
  return count === 1 ? '1 pattern counts' : `${count} patterns count`
}

function list(names: readonly string[]): string {
  return names.slice(0, 5).map(quoted).join(', ') + (names.length > 5 ? ` and ${names.length - 5} more` : '')
}

/** Groups that are declared ScanIn or ScanOut mark their signals. */
function markScanSignals(file: StilFile, names: SignalNames): void {
  for (const groups of file.groups.values()) {
    for (const group of groups.values()) {
      if (group.scan === 0) continue
      for (const signal of names.membersOf(group)) file.signals.scan[signal] = group.scan
    }
  }
}

/** False where no pin of the netlist is a signal of the file: they do not belong together. */
function checkSignals(
  file: StilFile,
  pins: PinMap,
  netlist: Netlist | null,
  source: Source,
  findings: StilFindings,
): boolean {
  if (netlist === null) return true
  const { circuit } = netlist
  const missing = (nets: Uint32Array, signals: Int32Array): string[] =>
    Array.from(nets, (net) => circuit.names[net] ?? '').filter((_, row) => signals[row] < 0)
  const inputs = missing(circuit.inputs, pins.inputSignal)
  const outputs = missing(circuit.outputs, pins.outputSignal)
  const start = { start: 0, end: Math.min(4, source.text.length) }
  const ports = circuit.inputs.length + circuit.outputs.length
  if (ports > 0 && inputs.length + outputs.length === ports) {
    findings.report(
      'missing-signal',
      source,
      start,
      `none of the ${file.signals.names.length} signals here is an input or output of ${quoted(circuit.name)}`,
      'Do the patterns belong to this netlist?',
    )
    return false
  }
  if (inputs.length > 0) {
    const message = `no signal here for ${inputs.length} inputs of the netlist: ${list(inputs)}; they are taken as X`
    findings.caution('missing-signal', source, start, 'inputs', message)
  }
  if (outputs.length > 0) {
    const message = `no signal here for ${outputs.length} outputs of the netlist: ${list(outputs)}; they are not observed`
    findings.caution('missing-signal', source, start, 'outputs', message)
  }
  return true
}
