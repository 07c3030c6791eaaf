import type { Run } from '../contract/shapes/run.ts'
import type { FaultList } from '../engine/faults/fault-list.ts'
import { countStates } from '../engine/faults/fault-state.ts'
import type { DetectionProfile } from '../engine/simulate/detection-profile.ts'

/** Returns what is shown of a run: how many faults stand in which state, and the coverage. */
export function runFigures(faults: FaultList, profile: DetectionProfile): NonNullable<Run['figures']> {
  const { nFaults, nClasses } = faults
  const counts = countStates(faults, profile)
  return {
    faults: nFaults,
    collapsedFaults: nClasses,
    ...counts,
    coverage: nFaults > 0 ? counts.detected / nFaults : 0,
  }
}
