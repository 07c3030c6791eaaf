import { expect, test } from 'vitest'
import { constraintCosts } from '../../../app/engine/choose/constraint-costs.ts'
import { readConstraints } from '../../../app/engine/formats/constraints/read-constraints.ts'
import { freeTask, matrixOf } from '../../helpers/detection-matrix.ts'

// Gains, patterns from 1: 5, 4, 3, 2, 1 faults of their own.
const matrix = matrixOf(
  5,
  [0, 0, 0, 0, 0, 1, 1, 1, 1, 2, 2, 2, 3, 3, 4].map((pattern) => [pattern]),
)

function costs(text: string, budget: number) {
  const { value } = readConstraints({ name: 'constraints.json', text }, 5)
  if (value === null) throw new Error('the constraints are refused')
  const task = freeTask(matrix, { rules: value.rules })
  return constraintCosts(task, value.constraints, value.parts, budget)?.map(
    ({ part, weightWithout, cost, isInTheWay }) => [
      `${part.kind} ${part.text}`,
      weightWithout,
      cost,
      isInTheWay,
    ],
  )
}

test('each entry costs what choosing without it detects more', () => {
  // With both: patterns 5 and 2 detect 5. Without keeping 5: 2 and 3 detect 7. With 1 allowed: 5 and 1 detect 6.
  expect(costs('{"keep": [5], "leaveOut": [1]}', 2)).toEqual([
    ['keep 5', 7, 2, false],
    ['leaveOut 1', 6, 1, false],
  ])
})

test('an entry that changes nothing costs nothing', () => {
  expect(costs('{"before": [[1, 2]], "together": [[3, 4]]}', 2)).toEqual([
    ['together [3,4]', 9, 0, false],
    ['before [1,2]', 9, 0, false],
  ])
})

test('an entry without which something fits is in the way', () => {
  expect(costs('{"keep": ["3-5", 1]}', 3)).toEqual([
    ['keep "3-5"', 12, 12, true],
    ['keep 1', 6, 6, true],
  ])
})
