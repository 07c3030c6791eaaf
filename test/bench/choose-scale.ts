/**
 * Measures orders and ceilings on a synthetic matrix of realistic density.
 * Usage: node test/bench/choose-scale.ts [fault classes] [patterns] [detections]
 */
import { ceilingOf, patternBudgets } from '../../app/engine/choose/ceiling.ts'
import { curveOf } from '../../app/engine/choose/coverage-curve.ts'
import { steepestFirst } from '../../app/engine/choose/steepest-first.ts'
import { freeTask, syntheticMatrix } from '../helpers/detection-matrix.ts'

const [nRows = 40_000, nPatterns = 10_000, detections = 1] = process.argv.slice(2).map(Number)
const task = freeTask(syntheticMatrix(nRows, nPatterns, 1), { detections })

/** Runs a choice and prints how long it took and the longest time between two questions whether to go on. */
function measure<T>(name: string, work: (onProgress: () => boolean) => T | null): T {
  const start = performance.now()
  let last = start
  let longest = 0
  const result = work(() => {
    const now = performance.now()
    longest = Math.max(longest, now - last)
    last = now
    return true
  })
  if (result === null) throw new Error('the work ended early')
  const seconds = ((performance.now() - start) / 1000).toFixed(1)
  console.log(`${name}: ${seconds} s, at most ${longest.toFixed(0)} ms between questions`)
  return result
}

console.log(`${nRows} fault classes, ${nPatterns} patterns, ${detections} detections`)
const order = measure('steepest first', (ask) => steepestFirst(task, ask))
const { detected } = curveOf(task, order, nRows)
const { bounds } = measure('ceiling', (ask) =>
  ceilingOf(task, patternBudgets(nPatterns), { onProgress: ask }),
)
for (const k of [1, 2, 5, 10, 20, 50, 100, 200, 500, 1000, 2000]) {
  if (k > order.chosen) break
  const above = (100 * (bounds[k - 1] / detected[k] - 1)).toFixed(1)
  console.log(`${k} patterns detect ${detected[k]}; ceiling ${bounds[k - 1]}, ${above} % above`)
}
console.log(`memory: ${Math.round(process.resourceUsage().maxRSS / 1024)} MB at most`)
