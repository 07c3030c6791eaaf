import { setImmediate } from 'node:timers/promises'
import type { FaultList } from '../../engine/faults/fault-list.ts'
import { countStates, type StateCounts } from '../../engine/faults/fault-state.ts'
import type { Netlist } from '../../engine/circuit/netlist.ts'
import type { PatternReading } from '../../engine/formats/registry.ts'
import { compareResponse, type ResponseComparison } from '../../engine/simulate/compare-response.ts'
import type { SimulationResult, SimulationTask } from '../../engine/simulate/simulation.ts'
import type { FileWork } from './file-work.ts'
import { readNetlistFiles, type NetlistFiles } from './read-netlist-files.ts'
import { readPatternSources } from './read-pattern-sources.ts'
import { readSources } from './read-sources.ts'
import type { Simulator } from './simulator.ts'

/** A netlist and a pattern set, as read. */
export type ReadFiles = PatternReading & {
  readonly netlist: Netlist
  readonly faults: FaultList
  /** How long reading took, in seconds. */
  readonly readSeconds: number
}

/** The same, simulated. */
export type CoverageRun = ReadFiles & {
  readonly result: SimulationResult
  readonly states: StateCounts
  /** Null where the patterns expect nothing. */
  readonly comparison: ResponseComparison | null
  /** The simulation alone. */
  readonly simulateSeconds: number
}

/** Reads a netlist and patterns for it. Throws as valueOf does. */
export async function readRunFiles(
  netlistFiles: NetlistFiles,
  patternFiles: readonly string[],
  work: FileWork,
): Promise<ReadFiles> {
  const startedAt = performance.now()
  const sources = await readSources(patternFiles, work)
  const { netlist, faults } = await readNetlistFiles(netlistFiles, sources, work)
  const reading = readPatternSources(sources, netlist, work)
  return { ...reading, netlist, faults, readSeconds: (performance.now() - startedAt) / 1000 }
}

/** Reads another pattern set for a netlist that was read. */
export async function readOtherPatterns(
  { netlist, faults }: ReadFiles,
  patternFiles: readonly string[],
  work: FileWork,
): Promise<ReadFiles> {
  const startedAt = performance.now()
  const reading = readPatternSources(await readSources(patternFiles, work), netlist, work)
  return { ...reading, netlist, faults, readSeconds: (performance.now() - startedAt) / 1000 }
}

/** Simulates what was read: up to so many detections of each fault, 0 for all. Throws AppError 'cancelled'. */
export async function simulateFiles(
  files: ReadFiles,
  options: Pick<SimulationTask, 'detectionLimit' | 'wantMatrix'>,
  simulator: Simulator,
  work: FileWork,
): Promise<CoverageRun> {
  const { netlist, faults, patterns } = files
  const task = { circuit: netlist.circuit, faults, patterns, classes: null, ...options }
  const running = simulator.run(task, work)
  // The threads are told first, so that they simulate while this one compares.
  await setImmediate()
  const comparison = patterns.expected === null ? null : compareResponse(netlist, patterns)
  const { result, kernelSeconds } = await running
  return {
    ...files,
    result,
    states: countStates(faults, result.profile),
    comparison,
    simulateSeconds: kernelSeconds,
  }
}

/** Returns a run with the record of which pattern detects which of these classes. Throws AppError 'cancelled'. */
export async function withRecordOf(
  run: CoverageRun,
  classes: Uint32Array,
  simulator: Simulator,
  work: FileWork,
): Promise<CoverageRun> {
  const { netlist, faults, patterns } = run
  const task = { circuit: netlist.circuit, faults, patterns, classes, detectionLimit: 0, wantMatrix: true }
  const { result, kernelSeconds } = await simulator.run(task, work)
  return {
    ...run,
    result: { ...run.result, matrix: result.matrix },
    simulateSeconds: run.simulateSeconds + kernelSeconds,
  }
}
