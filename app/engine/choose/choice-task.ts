import type { DetectionMatrix } from '../simulate/detection-profile.ts'
import type { ChoiceRules } from './choice-rules.ts'

/** What a choice of patterns is made from. */
export type ChoiceTask = {
  readonly matrix: DetectionMatrix
  /** Length matrix.nRows: what detecting each class is worth, 0 or more; the number of its faults where nothing else is said. */
  readonly weights: Float64Array
  /** Length nPatterns: tester cycles of each pattern, above 0. All 1 to count patterns. */
  readonly costs: Float64Array
  readonly rules: ChoiceRules
  /** n: how many patterns have to detect a fault for it to count, 1 to 10. */
  readonly detections: number
}

/** Called by long choices every few milliseconds; `false` ends them early. */
export type ChoiceProgress = (done: number, total: number) => boolean

/** Returns 1 for each pattern: the costs under which a budget counts patterns. */
export function unitCosts(nPatterns: number): Float64Array {
  return new Float64Array(nPatterns).fill(1)
}

/** Returns a budget with slack for rounding, so that what takes exactly the limit fits whatever the order of the sum. */
export function withSlack(budget: number): number {
  return budget * (1 + 1e-12)
}
