import type { FaultList } from '../engine/faults/fault-list.ts'
import type { DetectionProfile } from '../engine/simulate/detection-profile.ts'

/**
 * Returns how many faults of the list the first k patterns of a profile detect, in file order; length nPatterns + 1.
 * Faults that the chain test covers are not among them.
 */
export function curveSoFar(
  { nFaults, classOf, lines }: FaultList,
  { first, nPatterns }: DetectionProfile,
): Float64Array<ArrayBuffer> {
  const detected = new Float64Array(nPatterns + 1)
  for (let fault = 0; fault < nFaults; fault++) {
    const at = first[classOf[fault] ?? 0] ?? -1
    if (at >= 0 && lines.byChainTest[fault >>> 1] !== 1) detected[at + 1] = (detected[at + 1] ?? 0) + 1
  }
  for (let k = 1; k <= nPatterns; k++) detected[k] = (detected[k] ?? 0) + (detected[k - 1] ?? 0)
  return detected
}
