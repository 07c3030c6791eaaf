import type { Ceiling } from './ceiling.ts'
import type { ChoiceTask } from './choice-task.ts'

/**
 * Everything that it takes to check one ceiling with whole numbers, without this program. Weights and multipliers are
 * whole; a bound in faults is the sum that they make divided by multiplierScale × weightScale.
 */
export type CeilingProof = {
  readonly budget: number
  /** No choice within the budget detects more. */
  readonly bound: number
  readonly detections: number
  readonly weightScale: number
  readonly multiplierScale: number
  /** What is kept, from 1: part of every choice, and paid for already. */
  readonly kept: readonly number[]
  readonly keptCost: number
  /** Weight of the faults without a multiplier: counted in full, whatever is chosen. */
  readonly otherWeight: number
  /** Groups of patterns, numbered from 1, that are chosen as one, with what they cost; equal ones stand here once. */
  readonly columns: readonly { readonly patterns: readonly number[]; readonly cost: number }[]
  /** Faults (equal ones added up): weight, detections still needed, multiplier, and the columns, from 0, that detect them. */
  readonly rows: readonly (readonly [
    weight: number,
    need: number,
    multiplier: number,
    columns: readonly number[],
  ])[]
}

/** Returns the proof of the bound with that index, or null where nothing fits the budget. */
export function ceilingProof(task: ChoiceTask, ceiling: Ceiling, index: number): CeilingProof | null {
  const { problem, proofOf, multipliers, scale, bounds, budgets } = ceiling
  if (proofOf[index] < 0) return null
  const { rules } = task
  const { nRows, rowStart, rowItems, weight, need, unitOfColumn, cost } = problem
  const lambda = multipliers[proofOf[index]]
  const patternsOf = (unit: number): number[] =>
    Array.from(
      rules.unitPatterns.subarray(rules.unitStart[unit], rules.unitStart[unit + 1]),
      (pattern) => pattern + 1,
    )

  let otherWeight = problem.keptWeight
  const rows: CeilingProof['rows'][number][] = []
  for (let row = 0; row < nRows; row++) {
    if (lambda[row] === 0) otherWeight += weight[row]
    else
      rows.push([
        weight[row],
        need[row],
        lambda[row],
        Array.from(rowItems.subarray(rowStart[row], rowStart[row + 1])),
      ])
  }
  return {
    budget: budgets[index],
    bound: bounds[index],
    detections: task.detections,
    weightScale: problem.weightScale,
    multiplierScale: scale,
    kept: [...rules.kept.keys()].filter((unit) => rules.kept[unit] === 1).flatMap(patternsOf),
    keptCost: problem.keptCost,
    otherWeight,
    columns: Array.from(unitOfColumn, (unit, column) => ({ patterns: patternsOf(unit), cost: cost[column] })),
    rows,
  }
}
