import { expect, test } from 'vitest'
import { kneeOf } from '../../../app/engine/choose/knee.ts'

const curve = (values: readonly number[]) => ({ detected: Float64Array.from(values), total: 100 })

// Source: Satopaa et al. 2011, figure 2, from memory: y = −1/(x + 0.1) + 5 on ten even points of 0 … 1 has its knee at 0.22.
test('the knee of −1/(x + 0.1) + 5 lies at x = 0.22', () => {
  const x = Float64Array.from({ length: 10 }, (_, at) => at / 9)
  const knee = kneeOf(curve([...x].map((one) => -1 / (one + 0.1) + 5)), x)
  expect(x[knee ?? 0]).toBeCloseTo(0.22, 2)
})

test('patterns after the last gain do not move the knee', () => {
  const rising = [0, 50, 75, 88, 94, 97, 98, 99, 99.5]
  expect(kneeOf(curve(rising))).toBe(3)
  expect(kneeOf(curve([...rising, ...new Array<number>(500).fill(99.5)]))).toBe(3)
})

test('effort that grows unevenly moves the knee', () => {
  const effort = Float64Array.of(0, 1, 2, 30, 31, 32, 33, 34, 35)
  expect(kneeOf(curve([0, 50, 75, 88, 94, 97, 98, 99, 99.5]), effort)).toBe(2)
})

test.each([[[0]], [[0, 10]], [[0, 0, 0]], [[0, 10, 20, 30, 40]]])('%j has no knee', (values) => {
  expect(kneeOf(curve(values))).toBeNull()
})
