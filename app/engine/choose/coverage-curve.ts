import type { ChoiceTask } from './choice-task.ts'
import type { CoverageCurve, Order } from './order.ts'

/**
 * Returns what an order detects after each pattern; a fault counts once `detections` patterns have detected it. Patterns
 * that are left out do not run, so the curve stays level over them. `total` is the weight of all faults of the base.
 */
export function curveOf(task: ChoiceTask, order: Order, total: number): CoverageCurve {
  const { matrix, weights, detections } = task
  const detected = new Float64Array(matrix.nPatterns + 1)
  const missing = new Uint8Array(matrix.nRows).fill(detections)
  const open = Uint32Array.from(missing.keys())
  let nOpen = open.length
  let sum = 0
  for (let place = 0; place < order.runs; place++) {
    const pattern = order.sequence[place]
    const word = pattern >>> 5
    const bit = pattern & 31
    let left = 0
    for (let at = 0; at < nOpen; at++) {
      const row = open[at]
      if (((matrix.words[row * matrix.wordsPerRow + word] >>> bit) & 1) === 1 && --missing[row] === 0)
        sum += weights[row]
      else open[left++] = row
    }
    nOpen = left
    detected[place + 1] = sum
  }
  detected.fill(sum, order.runs + 1)
  return { detected, total }
}
