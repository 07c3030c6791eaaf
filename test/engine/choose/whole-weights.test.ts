import { describe, expect, test } from 'vitest'
import { wholeWeights } from '../../../app/engine/choose/whole-weights.ts'

describe('weights as whole numbers', () => {
  test('stay as they are where they are whole', () => {
    expect(wholeWeights(Float64Array.of(0, 3, 1e6))).toEqual({ whole: Float64Array.of(0, 3, 1e6), scale: 1 })
  })

  test.each([[[0.1, 2.5, 0]], [[1e-9, 1]], [[2 ** 40, 1, 0.5]], [new Array<number>(1000).fill(1e6 + 1 / 3)]])(
    'are scaled by a power of two and rounded up, with sums in bounds',
    (weights) => {
      const { whole, scale } = wholeWeights(Float64Array.from(weights))
      expect(Number.isInteger(Math.log2(scale))).toBe(true)
      for (const [at, weight] of weights.entries()) {
        expect(Number.isInteger(whole[at])).toBe(true)
        expect(whole[at] / scale).toBeGreaterThanOrEqual(weight)
        expect(whole[at] - weight * scale).toBeLessThan(1)
      }
      expect(whole.reduce((sum, one) => sum + one, 0)).toBeLessThanOrEqual(2 ** 35)
    },
  )

  test.each([[-1], [NaN], [Infinity]])('refuse %d', (weight) => {
    expect(() => wholeWeights(Float64Array.of(1, weight))).toThrow(RangeError)
  })
})
