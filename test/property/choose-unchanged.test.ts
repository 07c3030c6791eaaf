import { describe, expect, test } from 'vitest'
import { ceilingOf, patternBudgets } from '../../app/engine/choose/ceiling.ts'
import type { ChoiceTask } from '../../app/engine/choose/choice-task.ts'
import { curveOf } from '../../app/engine/choose/coverage-curve.ts'
import { detectedWeight } from '../../app/engine/choose/detected-weight.ts'
import { smallestCompleteSet } from '../../app/engine/choose/smallest-complete-set.ts'
import { steepestFirst } from '../../app/engine/choose/steepest-first.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import { hasData, readData } from '../helpers/data.ts'
import { freeTask, matrixOf, rowsOf, syntheticMatrix } from '../helpers/detection-matrix.ts'
import { randomRun } from '../helpers/random-run.ts'

const matrix = syntheticMatrix(300, 120, 17)
const rows = rowsOf(matrix)
const weights = Float64Array.from(rows, (_, row) => 1 + (row % 4))
const bounds = (task: ChoiceTask): number[] => [
  ...(ceilingOf(task, patternBudgets(task.costs.length))?.bounds ?? []),
]
const smallest = (task: ChoiceTask) => {
  const found = smallestCompleteSet(task)
  return { cost: found?.cost, lowerBound: found?.lowerBound }
}
const original = freeTask(matrix, { weights })

describe('changes that change nothing that counts', () => {
  test('patterns in another order have the same ceiling and the same smallest set', () => {
    const random = createRandom(3)
    const place = [...Array(120).keys()]
    for (let at = 119; at > 0; at--) {
      const other = random.below(at + 1)
      ;[place[at], place[other]] = [place[other], place[at]]
    }
    const shuffled = freeTask(
      matrixOf(
        120,
        rows.map((list) => list.map((pattern) => place[pattern])),
      ),
      { weights },
    )
    expect(bounds(shuffled)).toEqual(bounds(original))
    expect(smallest(shuffled)).toEqual(smallest(original))
  })

  test('a file given twice has the same ceiling and smallest set, and its second half gains nothing', () => {
    const doubled = freeTask(
      matrixOf(
        240,
        rows.map((list) => [...list, ...list.map((pattern) => pattern + 120)]),
      ),
      { weights },
    )
    const once = bounds(original)
    expect(bounds(doubled)).toEqual([...once, ...new Array<number>(120).fill(once[119])])
    expect(smallest(doubled)).toEqual(smallest(original))
    const order = steepestFirst(doubled)
    expect(order?.chosen).toBe(steepestFirst(original)?.chosen)
    expect(Math.max(...(order?.sequence.slice(0, order.chosen) ?? []))).toBeLessThan(120)
  })

  test.skipIf(!hasData)('nets with other names give the same ceiling and the same smallest set', () => {
    const source = readData('circuits/iscas85/c432.bench')
    const renamed = { ...source, text: source.text.replaceAll(/\b(\d+)(?=[),\s])/g, 'net_$1_x') }
    const [one, other] = [source, renamed].map((each) => randomRun(each, 200, 5))
    const [task, again] = [one, other].map((run) => freeTask(run.matrix, { weights: run.weights }))
    expect(renamed.text).not.toBe(source.text)
    expect(bounds(again)).toEqual(bounds(task))
    expect(smallest(again)).toEqual(smallest(task))
  })
})

test('costs that are not whole give the same ceiling as the whole costs that they are multiples of', () => {
  const costs = Float64Array.from({ length: 120 }, (_, pattern) => 1 + (pattern % 3))
  const budgets = Float64Array.from({ length: 60 }, (_, at) => at + 1)
  const whole = ceilingOf({ ...original, costs }, budgets)?.bounds
  const tenths = ceilingOf(
    { ...original, costs: costs.map((cost) => cost / 10) },
    budgets.map((budget) => budget / 10),
  )?.bounds
  for (const [at, bound] of (whole ?? []).entries())
    expect(Math.abs(bound - (tenths?.[at] ?? NaN))).toBeLessThanOrEqual(2)
})

describe('a thousand random choices stay under the ceiling', () => {
  const random = createRandom(29)
  const costs = Float64Array.from({ length: 120 }, () => 5 + random.below(40))
  const cases: [string, ChoiceTask][] = [
    ['of a number of patterns', original],
    ['of a number of cycles', { ...original, costs }],
    ['where two detections count', { ...original, detections: 2 }],
    ['where four detections count, by cycles', { ...original, costs, detections: 4 }],
    ['where weights are not whole', { ...original, weights: weights.map((weight) => weight / 3) }],
  ]
  test.each(cases)('%s', (_, task) => {
    const reach = task.costs.reduce((sum, cost) => sum + cost, 0)
    const most = ceilingOf(task, patternBudgets(reach))?.bounds ?? []
    for (let turn = 0; turn < 1000; turn++) {
      const size = 1 + random.below(60)
      const chosen = new Set(Array.from({ length: size }, () => random.below(120)))
      const cost = [...chosen].reduce((sum, pattern) => sum + task.costs[pattern], 0)
      expect(most[cost - 1]).toBeGreaterThanOrEqual(detectedWeight(task, [...chosen]))
    }
    const order = steepestFirst(task)
    if (order === null) throw new Error('nothing asked the order to end')
    const { detected } = curveOf(task, order, 1)
    let spent = 0
    for (let k = 1; k <= 120; k++) {
      spent += task.costs[order.sequence[k - 1]]
      expect(most[spent - 1]).toBeGreaterThanOrEqual(detected[k])
    }
  })
})
