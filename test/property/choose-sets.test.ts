import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { detectedWeight } from '../../app/engine/choose/detected-weight.ts'
import { improveAtBudget } from '../../app/engine/choose/improve-at-budget.ts'
import { lostFaults } from '../../app/engine/choose/lost-faults.ts'
import { bestPrefixOrSingle } from '../../app/engine/choose/best-prefix-or-single.ts'
import { smallestCompleteSet } from '../../app/engine/choose/smallest-complete-set.ts'
import { steepestFirst, steepestWithin } from '../../app/engine/choose/steepest-first.ts'
import { createHighsSolver } from '../../app/workers/highs-solver.ts'
import { allChoices, smallTask } from '../helpers/small-choices.ts'

const solveMip = createHighsSolver()

describe('on small tasks, against every choice there is', () => {
  test('the smallest complete set is one, its bound holds, and where they meet nothing is cheaper', () => {
    fc.assert(
      fc.property(smallTask, fc.boolean(), (anyTask, withSolver) => {
        const task = { ...anyTask, detections: 1 }
        const everyFault = { ...task, weights: task.weights.map(() => 1) }
        const all = detectedWeight(everyFault, task.rules.unitPatterns)
        const complete = allChoices(task).filter(
          ({ patterns }) => detectedWeight(everyFault, patterns) === all,
        )
        const least = Math.min(...complete.map(({ cost }) => cost))
        const found = smallestCompleteSet(task, withSolver ? { solveMip } : {})
        if (found === null) throw new Error('nothing asked the search to end')
        expect(complete.map(({ patterns }) => patterns.sort((a, b) => a - b).join())).toContain(
          found.patterns.join(),
        )
        expect(found.lowerBound).toBeLessThanOrEqual(least)
        expect(found.cost).toBeGreaterThanOrEqual(least)
        expect(found.proven).toBe(found.lowerBound === found.cost)
        const order = steepestWithin(task, 'smallest', found.patterns)
        expect([...order.sequence.slice(0, order.chosen)].sort((a, b) => a - b)).toEqual([...found.patterns])
      }),
      { seed: 21, numRuns: 400 },
    )
  })

  test('improving keeps to budget and rules, never loses, and is the best there is where it says so', () => {
    fc.assert(
      fc.property(smallTask, fc.integer({ min: 1, max: 20 }), fc.boolean(), (task, budget, withSolver) => {
        const order = steepestFirst(task)
        const start = order && bestPrefixOrSingle(task, order, budget)
        const fitting = allChoices(task).filter(({ cost }) => cost <= budget)
        expect(start === null).toBe(fitting.length === 0)
        if (start === null) return
        const best = Math.max(...fitting.map(({ patterns }) => detectedWeight(task, patterns)))
        const found = improveAtBudget(task, start.patterns, budget, withSolver ? { solveMip } : {})
        if (found === null) throw new Error('nothing asked the search to end')
        expect(fitting.map(({ patterns }) => patterns.sort((a, b) => a - b).join())).toContain(
          found.patterns.join(),
        )
        expect(found.weight).toBe(detectedWeight(task, found.patterns))
        expect(found.weight).toBeGreaterThanOrEqual(start.weight)
        expect(found.weight - best).toBeLessThanOrEqual(1e-9)
        expect(found.bound).toBeGreaterThanOrEqual(best)
        if (found.proven) expect(found.weight).toBeCloseTo(best, 9)
      }),
      { seed: 22, numRuns: 400 },
    )
  })

  test('what a cut loses comes back with the pattern named, and with no cheaper one', () => {
    fc.assert(
      fc.property(smallTask, fc.integer({ min: 0, max: 5 }), (task, length) => {
        const order = steepestFirst(task)
        if (order === null) throw new Error('nothing asked the order to end')
        const chosen = [...order.sequence.slice(0, Math.min(length, order.runs))]
        const lost = lostFaults(task, chosen)
        const all = detectedWeight(task, task.rules.unitPatterns)
        expect(lost.weight.reduce((sum, weight) => sum + weight, 0)).toBeCloseTo(
          all - detectedWeight(task, chosen),
          9,
        )
        for (const [at, row] of lost.row.entries()) {
          const onlyRow = { ...task, weights: task.weights.map((_, one) => (one === row ? 1 : 0)) }
          const outside = [...task.rules.unitPatterns].filter((pattern) => !chosen.includes(pattern))
          const helping = outside.filter((pattern) => detectedWeight(onlyRow, [...chosen, pattern]) === 1)
          const costOf = (pattern: number): number => {
            const unit = task.rules.unitOf[pattern]
            const members = task.rules.unitPatterns.subarray(
              task.rules.unitStart[unit],
              task.rules.unitStart[unit + 1],
            )
            return members.reduce((sum, one) => sum + task.costs[one], 0)
          }
          if (helping.length === 0) expect(lost.pattern[at]).toBe(-1)
          else {
            expect(helping).toContain(lost.pattern[at])
            expect(lost.cost[at]).toBe(Math.min(...helping.map(costOf)))
          }
        }
      }),
      { seed: 23, numRuns: 300 },
    )
  })
})
