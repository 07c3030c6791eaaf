import { faultName, type FaultList } from '../faults/fault-list.ts'
import { stateOfFault } from '../faults/fault-state.ts'
import type { DetectionProfile } from '../simulate/detection-profile.ts'

/** What one run says of its faults. */
export type ComparedRun = { readonly faults: FaultList; readonly profile: DetectionProfile }

/** How two runs differ, in uncollapsed faults that both lists have; a fault is gained where the second run alone detects it. */
export type DetectionComparison = {
  readonly both: number
  readonly neither: number
  /** Names in the order of the first list. */
  readonly gained: readonly string[]
  readonly lost: readonly string[]
  /** Faults that one list has and the other has not; 0 for runs on one netlist. */
  readonly onlyInFirst: number
  readonly onlyInSecond: number
}

/**
 * Compares two runs fault by fault: by number where both stand on one fault list, else by name. Throws a RangeError where
 * one counts on lines and the other on cell pins, which are never compared.
 */
export function compareDetections(first: ComparedRun, second: ComparedRun): DetectionComparison {
  const { faults } = first
  if (faults.base !== second.faults.base) {
    throw new RangeError(
      `one run counts faults on ${faults.base} and the other on ${second.faults.base}: they are never compared`,
    )
  }
  const other = faultFinder(faults, second.faults)
  const gained: string[] = []
  const lost: string[] = []
  let both = 0
  let neither = 0
  let missing = 0
  for (let fault = 0; fault < faults.nFaults; fault++) {
    const match = other(fault)
    if (match < 0) {
      missing++
      continue
    }
    const before = isDetected(first, fault)
    const after = isDetected(second, match)
    if (before && after) both++
    else if (before) lost.push(faultName(faults, fault))
    else if (after) gained.push(faultName(faults, fault))
    else neither++
  }
  return {
    both,
    neither,
    gained,
    lost,
    onlyInFirst: missing,
    onlyInSecond: second.faults.nFaults - (faults.nFaults - missing),
  }
}

function isDetected({ faults, profile }: ComparedRun, fault: number): boolean {
  return stateOfFault(faults, profile, fault) === 'detected'
}

/** Returns a function from a fault of the first list to that of the second, −1 where it has none. */
function faultFinder(from: FaultList, to: FaultList): (fault: number) => number {
  if (from === to) return (fault) => fault
  const byName = new Map<string, number>()
  for (let fault = 0; fault < to.nFaults; fault++) byName.set(faultName(to, fault), fault)
  return (fault) => byName.get(faultName(from, fault)) ?? -1
}
