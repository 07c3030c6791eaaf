import { expect, test } from 'vitest'
import { costPlot, costWindow } from '../../../renderer/charts/cost-option.ts'

const curve = (...values: number[]): Float64Array => Float64Array.from(values)

test('sums of the first patterns do not press the rest flat, and what lies behind the last gain is seen', () => {
  const total = curve(10_000, 900, 300, 100, 110, 120, 130, 140)
  const curves = { total, test: total, escapes: total }
  const { x, y } = costWindow(curves, 4, 2)
  expect(x).toEqual({ from: 0, to: 5 })
  expect(y.to).toBeCloseTo(3 * 100 * 1.05)
  expect(costWindow(curves, 4, 7).x.to).toBe(7)
})

test('a flat curve and a curve of nothing have a height', () => {
  const nothing = curve(0, 0, 0)
  expect(costWindow({ total: nothing, test: nothing, escapes: nothing }, 0, 0).y.to).toBe(1)
})

test('the plot never turns inside out', () => {
  const { left, right, top, bottom } = costPlot({ width: 10, height: 10 })
  expect(right).toBeGreaterThan(left)
  expect(bottom).toBeGreaterThan(top)
})
