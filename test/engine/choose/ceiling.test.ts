import { describe, expect, test } from 'vitest'
import { ceilingOf, patternBudgets } from '../../../app/engine/choose/ceiling.ts'
import { type CeilingProof, ceilingProof } from '../../../app/engine/choose/ceiling-proof.ts'
import { compileRules } from '../../../app/engine/choose/choice-rules.ts'
import type { ChoiceTask } from '../../../app/engine/choose/choice-task.ts'
import { NO_CONSTRAINTS } from '../../../app/engine/choose/constraints.ts'
import { curveOf } from '../../../app/engine/choose/coverage-curve.ts'
import { steepestFirst } from '../../../app/engine/choose/steepest-first.ts'
import { freeTask, matrixOf, syntheticMatrix } from '../../helpers/detection-matrix.ts'

function ceiling(task: ChoiceTask, budgets = patternBudgets(task.costs.length)) {
  const found = ceilingOf(task, budgets)
  if (found === null) throw new Error('nothing asked the search to end')
  return found
}

describe('a ceiling', () => {
  // Source: domain.md: λ = w gives U(1) = the largest single gain.
  test('meets steepest first at one pattern, and at the end what the whole set detects', () => {
    const task = freeTask(syntheticMatrix(500, 80, 2))
    const order = steepestFirst(task)
    if (order === null) throw new Error('nothing asked the order to end')
    const { detected } = curveOf(task, order, 500)
    const { bounds } = ceiling(task)
    expect(bounds[0]).toBe(detected[1])
    expect(bounds[79]).toBe(detected[80])
  })

  test('is what the kept patterns detect while the budget is too small for them', () => {
    const matrix = matrixOf(4, [[0], [0], [1], [2], [2], [2], [3]])
    const { rules } = compileRules({ ...NO_CONSTRAINTS, keep: [0, 1] }, 4)
    if (rules === null) throw new Error('the constraints contradict')
    expect([...ceiling(freeTask(matrix, { rules })).bounds]).toEqual([3, 3, 6, 7])
  })

  test('takes a group as one column and leaves out what is left out', () => {
    const matrix = matrixOf(4, [[0], [1], [2], [2], [3], [3], [3]])
    const { rules } = compileRules({ ...NO_CONSTRAINTS, together: [[0, 1]], leaveOut: [3] }, 4)
    if (rules === null) throw new Error('the constraints contradict')
    expect([...ceiling(freeTask(matrix, { rules })).bounds]).toEqual([2, 3, 4, 4])
  })

  test('is 0 for every budget where nothing can be detected', () => {
    expect([...ceiling(freeTask(matrixOf(2, [[0], [1]]), { detections: 2 })).bounds]).toEqual([0, 0])
  })

  test('ends when it is asked to, at every stage', () => {
    const task = freeTask(syntheticMatrix(1500, 200, 4))
    for (const most of [1, 2, 10, 200]) {
      let questions = 0
      expect(ceilingOf(task, patternBudgets(200), { onProgress: () => ++questions < most })).toBeNull()
      expect(questions).toBe(most)
    }
  })

  test('reports progress that never falls and keeps to the effort given', () => {
    const steps: [number, number][] = []
    const task = freeTask(syntheticMatrix(1500, 200, 4))
    ceilingOf(task, patternBudgets(200), {
      effort: 1e7,
      onProgress: (done, total) => steps.push([done, total]) > 0,
    })
    expect(
      steps.every(([done, total], at) => total === 1e7 && done <= total && done >= (steps[at - 1]?.[0] ?? 0)),
    ).toBe(true)
    expect(steps.length).toBeGreaterThan(10)
  })
})

/** Checks a proof in whole numbers of any size and returns the bound that it gives. Written from the proof's description alone. */
function checkProof(proof: CeilingProof): number {
  const gains = proof.columns.map(() => 0n)
  let sum = BigInt(proof.otherWeight) * BigInt(proof.multiplierScale)
  for (const [weight, need, multiplier, columns] of proof.rows) {
    const outside = BigInt(weight) * BigInt(proof.multiplierScale) - BigInt(need) * BigInt(multiplier)
    if (multiplier < 0 || outside < 0n) throw new Error('a multiplier lies outside its limits')
    sum += outside
    for (const column of columns) gains[column] += BigInt(multiplier)
  }
  const steepest = proof.columns.map(({ cost }, column) => ({ cost: BigInt(cost), gain: gains[column] }))
  steepest.sort((a, b) => Number(b.gain * a.cost - a.gain * b.cost))
  let left = BigInt(proof.budget - proof.keptCost)
  for (const { cost, gain } of steepest) {
    if (left <= 0n) break
    sum += left >= cost ? gain : (gain * left) / cost + 1n
    left -= cost
  }
  return Number(sum / BigInt(proof.multiplierScale)) / proof.weightScale
}

describe('the proof of a ceiling', () => {
  const matrix = syntheticMatrix(300, 60, 8)
  const { rules } = compileRules({ ...NO_CONSTRAINTS, keep: [3], together: [[5, 6, 7]], leaveOut: [9] }, 60)
  const costs = Float64Array.from({ length: 60 }, (_, pattern) => 10 + ((pattern * 7) % 13))
  const cases: [string, Partial<ChoiceTask>, number][] = [
    ['faults that count alike', {}, 1],
    ['costs', { costs }, 10],
    ['two detections', { detections: 2 }, 1],
    [
      'weights that are not whole',
      { weights: Float64Array.from({ length: 300 }, (_, row) => (row % 7) / 3) },
      1,
    ],
    ['constraints', rules === null ? {} : { rules, costs }, 10],
  ]
  test.each(cases)('with %s gives the bound in whole numbers', (_, changes, unit) => {
    const task = freeTask(matrix, changes)
    const found = ceiling(
      task,
      Float64Array.from({ length: 40 }, (_, at) => unit * (at + 2)),
    )
    for (let at = 0; at < 40; at++) {
      const proof = ceilingProof(task, found, at)
      if (proof !== null)
        expect(checkProof(JSON.parse(JSON.stringify(proof)) as CeilingProof)).toBe(found.bounds[at])
      else expect(task.rules.kept.includes(1)).toBe(true)
    }
  })
})
