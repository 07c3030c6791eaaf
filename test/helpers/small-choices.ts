import fc from 'fast-check'
import { compileRules } from '../../app/engine/choose/choice-rules.ts'
import type { ChoiceTask } from '../../app/engine/choose/choice-task.ts'
import { matrixOf } from './detection-matrix.ts'

/** Small tasks of every kind: weights whole or not, unequal costs, constraints that hold together, n-detect. */
export const smallTask: fc.Arbitrary<ChoiceTask> = fc
  .integer({ min: 1, max: 8 })
  .chain((nPatterns) => {
    const pattern = fc.nat({ max: nPatterns - 1 })
    const few = fc.uniqueArray(pattern, { maxLength: 2 })
    return fc.record({
      nPatterns: fc.constant(nPatterns),
      rows: fc.array(fc.uniqueArray(pattern, { minLength: 1 }), { minLength: 1, maxLength: 10 }),
      weights: fc.array(
        fc.oneof(fc.integer({ min: 0, max: 5 }), fc.double({ min: 0, max: 3, noNaN: true })),
        {
          minLength: 10,
          maxLength: 10,
        },
      ),
      costs: fc.oneof(
        fc.constant(new Array<number>(nPatterns).fill(1)),
        fc.array(fc.integer({ min: 1, max: 6 }), { minLength: nPatterns, maxLength: nPatterns }),
      ),
      detections: fc.integer({ min: 1, max: 3 }),
      constraints: fc.record({
        keep: fc.oneof(fc.constant([]), few),
        leaveOut: fc.oneof(fc.constant([]), few),
        together: fc.oneof(
          fc.constant([]),
          fc.tuple(fc.uniqueArray(pattern, { minLength: 1, maxLength: 3 })),
        ),
        before: fc.oneof(fc.constant([]), fc.array(fc.tuple(pattern, pattern), { maxLength: 3 })),
        first: fc.oneof(fc.constant([]), few),
      }),
    })
  })
  .map(({ nPatterns, rows, weights, costs, detections, constraints }) => {
    const { rules } = compileRules(constraints, nPatterns)
    return rules === null
      ? null
      : {
          matrix: matrixOf(nPatterns, rows),
          weights: Float64Array.from(weights.slice(0, rows.length)),
          costs: Float64Array.from(costs),
          rules,
          detections,
        }
  })
  .filter((task) => task !== null)

/** Every choice that the rules allow, by trying all sets of units. */
export function allChoices({ rules, costs }: ChoiceTask): { patterns: number[]; cost: number }[] {
  const { nUnits, unitStart, unitPatterns, kept, predecessorStart, predecessors } = rules
  const choices: { patterns: number[]; cost: number }[] = []
  for (let set = 0; set < 1 << nUnits; set++) {
    const holds = (unit: number): boolean => ((set >> unit) & 1) === 1
    const units = [...Array(nUnits).keys()].filter(holds)
    const isAllowed =
      [...kept.keys()].every((unit) => kept[unit] === 0 || holds(unit)) &&
      units.every((unit) =>
        [...predecessors.subarray(predecessorStart[unit], predecessorStart[unit + 1])].every(holds),
      )
    if (!isAllowed) continue
    const patterns = units.flatMap((unit) => [...unitPatterns.subarray(unitStart[unit], unitStart[unit + 1])])
    choices.push({ patterns, cost: patterns.reduce((sum, pattern) => sum + costs[pattern], 0) })
  }
  return choices
}
