import { expect, test } from 'vitest'
import { escapeTicks } from '../../../renderer/charts/escape-ticks.ts'
import { orderColumns } from '../../helpers/budget-columns.ts'

// Williams and Brown 1981: DL = 1 − Y^(1−T), so T = 1 − ln(1 − DL) / ln Y; here Y = 0.94.
test('an escape rate stands at the coverage that gives it', () => {
  const { detected, dppm } = orderColumns('steepest', 5000, 400)
  const ticks = escapeTicks(detected, dppm, 40_000, { from: 0.955, to: 0.9945 }, 6)
  expect(ticks.map((tick) => tick.dppm)).toEqual([1000, 1500, 2000, 2500])
  for (const tick of ticks) {
    expect(tick.coverage).toBeCloseTo(1 - Math.log(1 - tick.dppm / 1e6) / Math.log(0.94), 4)
  }
})
