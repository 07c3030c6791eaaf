import type { FaultList } from '../faults/fault-list.ts'
import type { DetectionProfile } from './detection-profile.ts'

/** Returns how many faults, uncollapsed, the first k patterns detect in file order; length nPatterns + 1. */
export function detectedAfter(faults: FaultList, profile: DetectionProfile): Float64Array {
  const { lines, nFaults, classOf } = faults
  const detected = new Float64Array(profile.nPatterns + 1)
  for (let fault = 0; fault < nFaults; fault++) {
    const first = profile.first[classOf[fault]]
    if (first >= 0 && lines.byChainTest[fault >>> 1] === 0) detected[first + 1]++
  }
  for (let k = 1; k < detected.length; k++) detected[k] += detected[k - 1]
  return detected
}
