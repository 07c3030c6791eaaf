import { expect, test } from 'vitest'
import { niceTicks, tickDigits } from '../../../renderer/charts/nice-ticks.ts'

// The rule is the chart rules' own: 1, 2 or 5 × 10ⁿ, worked out by hand.
test('ticks are multiples of 1, 2 or 5 × 10ⁿ and never more than asked', () => {
  expect(niceTicks(0, 1024, 8)).toEqual([0, 200, 400, 600, 800, 1000])
  expect(niceTicks(95.5, 99.45, 6)).toEqual([96, 97, 98, 99])
  expect(niceTicks(0, 1, 11)).toEqual([0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1])
  expect(niceTicks(98.0002, 98.0009, 4)).toEqual([98.0002, 98.0004, 98.0006, 98.0008])
})

test('a range without width has no ticks', () => {
  expect(niceTicks(3, 3, 5)).toEqual([])
  expect(niceTicks(0, Number.NaN, 5)).toEqual([])
})

test('labels have just the digits that tell ticks apart', () => {
  expect(tickDigits([96, 97])).toBe(0)
  expect(tickDigits([0.1, 0.2])).toBe(1)
  expect(tickDigits([98.0002, 98.0004])).toBe(4)
})
