import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { bestPrefixOrSingle } from '../../app/engine/choose/best-prefix-or-single.ts'
import { ceilingOf, patternBudgets } from '../../app/engine/choose/ceiling.ts'
import { curveOf } from '../../app/engine/choose/coverage-curve.ts'
import { cutPlaces } from '../../app/engine/choose/cut-places.ts'
import { deliveredOrder } from '../../app/engine/choose/delivered-order.ts'
import { detectedWeight } from '../../app/engine/choose/detected-weight.ts'
import { steepestFirst } from '../../app/engine/choose/steepest-first.ts'
import { allChoices, smallTask } from '../helpers/small-choices.ts'

describe('on small tasks, against every choice there is', () => {
  test('no choice within a budget beats its ceiling, and ceilings never fall', () => {
    fc.assert(
      fc.property(smallTask, (task) => {
        const total = task.costs.reduce((sum, cost) => sum + cost, 0)
        const ceiling = ceilingOf(task, patternBudgets(total))
        const bounds = ceiling?.bounds ?? new Float64Array()
        expect(bounds.length).toBe(total)
        for (let at = 1; at < bounds.length; at++) expect(bounds[at]).toBeGreaterThanOrEqual(bounds[at - 1])
        for (const { patterns, cost } of allChoices(task)) {
          if (cost > 0) expect(bounds[cost - 1]).toBeGreaterThanOrEqual(detectedWeight(task, patterns))
        }
      }),
      { seed: 11, numRuns: 400 },
    )
  })

  test('both orders hold every pattern once and may be cut only where a choice is allowed', () => {
    fc.assert(
      fc.property(smallTask, (task) => {
        const keys = new Set(allChoices(task).map(({ patterns }) => patterns.sort((a, b) => a - b).join()))
        for (const order of [deliveredOrder(task.rules), steepestFirst(task)]) {
          if (order === null) throw new Error('nothing asked the order to end')
          expect([...order.sequence].sort((a, b) => a - b)).toEqual([...task.costs.keys()])
          const places = cutPlaces(order, task.rules)
          for (const [k, mayCut] of places.entries()) {
            const key = [...order.sequence.slice(0, k)].sort((a, b) => a - b).join()
            expect(mayCut === 1).toBe(keys.has(key))
          }
        }
      }),
      { seed: 12, numRuns: 400 },
    )
  })

  test('the curve says what each prefix detects, and what is not chosen adds nothing', () => {
    fc.assert(
      fc.property(smallTask, (task) => {
        const order = steepestFirst(task)
        if (order === null) throw new Error('nothing asked the order to end')
        const { detected } = curveOf(task, order, 100)
        for (let k = 0; k <= order.runs; k++) {
          expect(detected[k]).toBeCloseTo(detectedWeight(task, order.sequence.slice(0, k)), 9)
        }
        for (let k = order.chosen; k < detected.length; k++) expect(detected[k]).toBe(detected[order.chosen])
      }),
      { seed: 13, numRuns: 400 },
    )
  })

  // Source: Nemhauser, Wolsey & Fisher 1978 for equal costs; Khuller, Moss & Naor 1999, theorem 3, for unequal ones.
  test('steepest first detects at least 1 − 1/e of the best, its better with the best single (1 − 1/e) / 2', () => {
    fc.assert(
      fc.property(smallTask, fc.integer({ min: 1, max: 12 }), (task, budget) => {
        const free = task.rules.predecessors.length === 0 && task.rules.nUnits === task.costs.length
        if (!free || task.detections > 1 || task.rules.kept.includes(1)) return
        const order = steepestFirst(task)
        if (order === null) throw new Error('nothing asked the order to end')
        const choice = bestPrefixOrSingle(task, order, budget)
        const fitting = allChoices(task).filter(({ cost }) => cost <= budget)
        const best = Math.max(...fitting.map(({ patterns }) => detectedWeight(task, patterns)))
        const isEqual = task.costs.every((cost) => cost === task.costs[0])
        expect(choice?.cost).toBeLessThanOrEqual(budget)
        expect(choice?.weight).toBeGreaterThanOrEqual(best * (1 - 1 / Math.E) * (isEqual ? 1 : 0.5) - 1e-9)
      }),
      { seed: 14, numRuns: 400 },
    )
  })
})
