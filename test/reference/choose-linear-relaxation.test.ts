import { describe, expect, test } from 'vitest'
import { ceilingOf, patternBudgets } from '../../app/engine/choose/ceiling.ts'
import type { ChoiceTask } from '../../app/engine/choose/choice-task.ts'
import { MipRows, type MipModel } from '../../app/engine/choose/mip.ts'
import { smallestCompleteSet } from '../../app/engine/choose/smallest-complete-set.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import { createHighsSolver } from '../../app/workers/highs-solver.ts'
import { hasData, readData } from '../helpers/data.ts'
import { freeTask, matrixOf, rowsOf, syntheticMatrix } from '../helpers/detection-matrix.ts'
import { randomRun } from '../helpers/random-run.ts'

const solve = createHighsSolver()
const always = (): boolean => true

/** Maximum coverage within a budget, as a textbook writes it: Nemhauser, Wolsey & Fisher 1978, section 1. */
function coverageModel(
  { matrix, weights, costs, detections }: ChoiceTask,
  budget: number,
  isWhole: 0 | 1,
): MipModel {
  const rows = rowsOf(matrix)
  const { nPatterns } = matrix
  const lines = new MipRows()
  for (const [row, patterns] of rows.entries()) {
    lines.add([...patterns, nPatterns + row], [...patterns.map(() => -1), detections], -Infinity, 0)
  }
  lines.add(costs.keys(), costs, -Infinity, budget)
  const length = nPatterns + rows.length
  return {
    goal: 'most',
    cost: Float64Array.from({ length }, (_, at) => (at < nPatterns ? 0 : weights[at - nPatterns])),
    upper: new Float64Array(length).fill(1),
    isWhole: new Uint8Array(length).fill(isWhole),
    ...lines.finish(),
  }
}

/** The most that the linear relaxation lets a budget detect. */
const relaxed = (task: ChoiceTask, budget: number): number =>
  solve(coverageModel(task, budget, 0), always).objective

// Source for all of these: HiGHS, which solves the linear relaxation and the whole problem by its own methods.
describe('ceilings against the linear relaxation', () => {
  const random = createRandom(5)
  const matrix = syntheticMatrix(200, 60, 7)
  const cases: [string, Partial<ChoiceTask>][] = [
    ['faults count alike', {}],
    ['faults have weights', { weights: Float64Array.from({ length: 200 }, () => 1 + random.below(9)) }],
    ['patterns have costs', { costs: Float64Array.from({ length: 60 }, () => 3 + random.below(20)) }],
    ['faults count from three detections on', { detections: 3 }],
  ]
  test.each(cases)('where %s they lie on it or a little above, and never below', (_, changes) => {
    const task = freeTask(matrix, changes)
    const reach = task.costs.reduce((sum, cost) => sum + cost, 0)
    const budgets = Float64Array.from({ length: 20 }, (_, at) => Math.ceil(((at + 1) / 30) * reach))
    const bounds = ceilingOf(task, budgets)?.bounds ?? []
    // Faults with fewer than n detections never count; the relaxation may give them a part.
    const counted = rowsOf(matrix).map((patterns) => patterns.length >= task.detections)
    const weights = task.weights.map((weight, row) => (counted[row] ? weight : 0))
    for (const [at, budget] of budgets.entries()) {
      const linear = relaxed({ ...task, weights }, budget)
      expect(bounds[at]).toBeGreaterThanOrEqual(Math.floor(linear - 1e-6))
      expect(bounds[at]).toBeLessThanOrEqual(linear * 1.01 + 1)
    }
  })

  test.skipIf(!hasData)('on c432 with 400 random patterns they lie within 1.5 % of it', () => {
    const run = randomRun(readData('circuits/iscas85/c432.bench'), 400, 3)
    const task = freeTask(run.matrix, { weights: run.weights })
    const bounds = ceilingOf(task, patternBudgets(40))?.bounds ?? []
    for (const k of [2, 5, 10, 20, 30, 40]) {
      const linear = relaxed(task, k)
      expect(bounds[k - 1]).toBeGreaterThanOrEqual(Math.floor(linear - 1e-6))
      expect(bounds[k - 1]).toBeLessThanOrEqual(linear * 1.015)
    }
  })
})

describe('the smallest complete set against the whole problem', () => {
  const random = createRandom(9)
  const tasks = Array.from({ length: 25 }, () => {
    const rows = Array.from({ length: 30 }, () => {
      const size = 1 + random.below(5)
      return [...new Set(Array.from({ length: size }, () => random.below(20)))]
    })
    const costs = Float64Array.from({ length: 20 }, () => 1 + random.below(4))
    return freeTask(matrixOf(20, rows), { costs })
  })
  test.each(tasks.map((task, at) => [at, task] as const))(
    'it costs as little as can be, and its bound is right: %d',
    (_, task) => {
      const lines = new MipRows()
      for (const patterns of rowsOf(task.matrix)) lines.add(patterns, 1, 1, Infinity)
      const least = solve(
        {
          goal: 'least',
          cost: task.costs,
          upper: task.costs.map(() => 1),
          isWhole: new Uint8Array(20).fill(1),
          ...lines.finish(),
        },
        always,
      ).objective
      const alone = smallestCompleteSet(task)
      const helped = smallestCompleteSet(task, { solveMip: solve })
      expect(alone?.lowerBound).toBeLessThanOrEqual(Math.round(least))
      expect(alone?.cost).toBeGreaterThanOrEqual(Math.round(least))
      expect(helped).toMatchObject({ cost: Math.round(least), lowerBound: Math.round(least), proven: true })
    },
  )
})
