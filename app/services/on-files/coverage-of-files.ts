import type { FaultList } from '../../engine/faults/fault-list.ts'
import { countStates, type StateCounts } from '../../engine/faults/fault-state.ts'
import type { Netlist } from '../../engine/circuit/netlist.ts'
import type { PatternReading } from '../../engine/formats/registry.ts'
import { compareResponse, type ResponseComparison } from '../../engine/simulate/compare-response.ts'
import type { SimulationResult } from '../../engine/simulate/simulation.ts'
import type { FileWork } from './file-work.ts'
import { readNetlistFiles, type NetlistFiles } from './read-netlist-files.ts'
import { readPatternSources } from './read-pattern-sources.ts'
import { readSources } from './read-sources.ts'
import type { Simulator } from './simulator.ts'

/** A netlist and a pattern set, simulated. */
export type CoverageRun = PatternReading & {
  readonly netlist: Netlist
  readonly faults: FaultList
  readonly result: SimulationResult
  readonly states: StateCounts
  /** Null where the patterns expect nothing. */
  readonly comparison: ResponseComparison | null
  readonly seconds: { readonly read: number; readonly simulate: number }
}

export type CoverageRequest = {
  readonly netlist: NetlistFiles
  readonly patterns: readonly string[]
  /** 1 first detection, N up to N, 0 all. */
  readonly detectionLimit: number
  readonly wantMatrix: boolean
}

/** Reads a netlist and patterns and simulates them. Throws as valueOf does. */
export async function coverageOfFiles(
  request: CoverageRequest,
  simulator: Simulator,
  work: FileWork,
): Promise<CoverageRun> {
  const startedAt = performance.now()
  const sources = await readSources(request.patterns, work)
  const { netlist, faults } = await readNetlistFiles(request.netlist, sources, work)
  const reading = readPatternSources(sources, netlist, work)
  const read = (performance.now() - startedAt) / 1000
  const { patterns } = reading
  const comparison = patterns.expected === null ? null : compareResponse(netlist, patterns)
  const { result, kernelSeconds } = await simulator.run(
    {
      circuit: netlist.circuit,
      faults,
      patterns,
      detectionLimit: request.detectionLimit,
      classes: null,
      wantMatrix: request.wantMatrix,
    },
    work,
  )
  return {
    ...reading,
    netlist,
    faults,
    result,
    states: countStates(faults, result.profile),
    comparison,
    seconds: { read, simulate: kernelSeconds },
  }
}

/** Returns the faults, uncollapsed, that are detected after each pattern in file order. */
export function detectedCurve({ faults, result: { profile } }: CoverageRun): number[] {
  const { lines, nFaults, classOf } = faults
  const gains = new Array<number>(profile.nPatterns).fill(0)
  for (let fault = 0; fault < nFaults; fault++) {
    const first = profile.first[classOf[fault] ?? 0] ?? -1
    if (first >= 0 && lines.byChainTest[fault >>> 1] === 0) gains[first] = (gains[first] ?? 0) + 1
  }
  let detected = 0
  return gains.map((gain) => (detected += gain))
}
