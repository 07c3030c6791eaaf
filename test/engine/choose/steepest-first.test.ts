import { describe, expect, test } from 'vitest'
import { bestPrefixOrSingle } from '../../../app/engine/choose/best-prefix-or-single.ts'
import { compileRules } from '../../../app/engine/choose/choice-rules.ts'
import { type Constraints, NO_CONSTRAINTS } from '../../../app/engine/choose/constraints.ts'
import { curveOf } from '../../../app/engine/choose/coverage-curve.ts'
import { steepestFirst } from '../../../app/engine/choose/steepest-first.ts'
import type { ChoiceTask } from '../../../app/engine/choose/choice-task.ts'
import { freeTask, matrixOf, syntheticMatrix } from '../../helpers/detection-matrix.ts'

function order(task: ChoiceTask) {
  const found = steepestFirst(task)
  if (found === null) throw new Error('nothing asked the order to end')
  return found
}

function rules(nPatterns: number, changes: Partial<Constraints>) {
  const compiled = compileRules({ ...NO_CONSTRAINTS, ...changes }, nPatterns).rules
  if (compiled === null) throw new Error('the constraints contradict')
  return compiled
}

describe('steepest first', () => {
  test('takes the largest gain, ties in file order, and leaves what gains nothing for the end', () => {
    // Gains: 2, 3, 2, 1, and after pattern 1: 1, –, 2, 0.
    const matrix = matrixOf(4, [[0, 1], [1], [1, 3], [2], [2], [0]])
    expect(order(freeTask(matrix))).toMatchObject({ sequence: Uint32Array.of(1, 2, 0, 3), chosen: 3 })
  })

  test('goes by gain per cycle', () => {
    const matrix = matrixOf(3, [[0], [0], [0], [1], [1], [2]])
    expect([...order(freeTask(matrix, { costs: Float64Array.of(9, 4, 1) })).sequence]).toEqual([2, 1, 0])
  })

  test('tells tiny weights from none', () => {
    const matrix = matrixOf(3, [[0], [1], [2]])
    const found = order(freeTask(matrix, { weights: Float64Array.of(1e-7, 0.3, 0) }))
    expect(found).toMatchObject({ sequence: Uint32Array.of(1, 0, 2), chosen: 2 })
  })

  test('takes a pattern that gains nothing along for one that waits for it', () => {
    const matrix = matrixOf(3, [[1], [1], [1], [2]])
    const task = freeTask(matrix, { rules: rules(3, { before: [[0, 1]] }) })
    expect(order(task)).toMatchObject({ sequence: Uint32Array.of(0, 1, 2), chosen: 3 })
    // The pair gains 3 for 2 patterns, pattern 2 gains 1 for 1: with a dear first pattern the pair comes last.
    const dear = freeTask(matrix, { rules: rules(3, { before: [[0, 1]] }), costs: Float64Array.of(5, 1, 1) })
    expect([...order(dear).sequence]).toEqual([2, 0, 1])
  })

  test('ends when it is asked to', () => {
    const task = freeTask(syntheticMatrix(2000, 300, 1))
    let questions = 0
    expect(steepestFirst(task, () => ++questions < 3)).toBeNull()
    expect(questions).toBe(3)
  })
})

// Source: Khuller, Moss & Naor 1999, the example in section 2 that motivates the better of the two.
test('where gain per cycle leads astray the best single pattern steps in', () => {
  const matrix = matrixOf(2, [[0], ...new Array<number[]>(9).fill([1])])
  const task = freeTask(matrix, { costs: Float64Array.of(1, 10) })
  const greedy = order(task)
  expect([...greedy.sequence]).toEqual([0, 1])
  expect(bestPrefixOrSingle(task, greedy, 10)).toMatchObject({
    patterns: Uint32Array.of(1),
    weight: 9,
    from: 'single',
  })
  expect(bestPrefixOrSingle(task, greedy, 11)).toMatchObject({ weight: 10, from: 'prefix' })
})

/**
 * Own example: only patterns 4 and 5 together detect ten faults twice, and four more faults lie in a ring over patterns 0
 * to 3. By the faults that a step completes no first step gains anything, so that rule falls back on the file order.
 */
describe('n-detect', () => {
  const pairs = Array.from({ length: 10 }, () => [4, 5])
  const rest = [
    [0, 1],
    [1, 2],
    [2, 3],
    [3, 0],
  ]
  const task = freeTask(matrixOf(6, [...pairs, ...rest]), { detections: 2 })

  test('by single gains alone the first two patterns complete one fault of fourteen', () => {
    const completedBy = (patterns: readonly number[]): number =>
      [...pairs, ...rest].filter((row) => row.filter((pattern) => patterns.includes(pattern)).length >= 2)
        .length
    const chosen: number[] = []
    for (let step = 0; step < 2; step++) {
      const left = [0, 1, 2, 3, 4, 5].filter((pattern) => !chosen.includes(pattern))
      chosen.push(left.reduce((a, b) => (completedBy([...chosen, b]) > completedBy([...chosen, a]) ? b : a)))
    }
    expect(completedBy(chosen)).toBe(1)
  })

  test('the order looks further and completes ten', () => {
    expect([...curveOf(task, order(task), 14).detected]).toEqual([0, 0, 10, 10, 11, 12, 14])
  })

  test('faults with too few detections in the whole set do not draw patterns', () => {
    const matrix = matrixOf(4, [[3], [3], [3], [3], [0, 1, 2], [0, 1]])
    const found = order(freeTask(matrix, { detections: 3 }))
    expect(found.chosen).toBe(3)
    expect([...found.sequence]).toEqual([0, 1, 2, 3])
  })
})
