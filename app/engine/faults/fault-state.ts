import type { DetectionProfile, FaultState } from '../simulate/detection-profile.ts'
import type { FaultList } from './fault-list.ts'

/** Returns how a fault stands under a run's patterns. Faults on the scan path are the chain test's, whatever their class is. */
export function stateOfFault(faults: FaultList, profile: DetectionProfile, fault: number): FaultState {
  if (faults.lines.byChainTest[fault >>> 1] === 1) return 'by the chain test'
  const group = faults.classOf[fault]
  if (profile.detections[group] > 0) return 'detected'
  return profile.possibly[group] === 1 ? 'possibly detected' : 'not detected'
}

/** How many faults of a list stand where. */
export type StateCounts = {
  readonly detected: number
  readonly possibly: number
  readonly byChainTest: number
  /** Classes that are detected. */
  readonly collapsedDetected: number
}

/** Counts uncollapsed faults by their state, and detected classes. */
export function countStates(faults: FaultList, profile: DetectionProfile): StateCounts {
  let detected = 0
  let possibly = 0
  let byChainTest = 0
  for (let fault = 0; fault < faults.nFaults; fault++) {
    const state = stateOfFault(faults, profile, fault)
    if (state === 'detected') detected++
    else if (state === 'possibly detected') possibly++
    else if (state === 'by the chain test') byChainTest++
  }
  const collapsedDetected = profile.detections.reduce((sum, count) => sum + (count > 0 ? 1 : 0), 0)
  return { detected, possibly, byChainTest, collapsedDetected }
}
