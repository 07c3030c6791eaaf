import { expect, test } from 'vitest'
import { createRandom, randomFromState } from '../../../app/engine/source/random.ts'

test('the same seed gives the same numbers, another seed others', () => {
  const draw = (seed: number): number[] => {
    const random = createRandom(seed)
    return Array.from({ length: 5 }, () => random.bits())
  }
  expect(draw(1)).toEqual(draw(1))
  expect(draw(1)).not.toEqual(draw(2))
  expect(new Set(Array.from({ length: 100 }, (_, seed) => draw(seed)[0])).size).toBe(100)
})

// Source: the reference generator started at 1, 2, 3, 4; its outputs from memory, the fifth of them not surely.
test('the numbers are those of xoshiro128**', () => {
  const random = randomFromState(1, 2, 3, 4)
  const numbers = Array.from({ length: 8 }, () => random.bits())
  expect(numbers.slice(0, 4)).toEqual([11520, 0, 5927040, 70819200])
  expect(numbers.slice(5)).toEqual([1637235492, 1287239034, 3734860849])
})

test('small ranges come out evenly', () => {
  const random = createRandom(3)
  const counts = new Array<number>(6).fill(0)
  for (let roll = 0; roll < 60_000; roll++) counts[random.below(6)]++
  // Chi-square with 5 degrees of freedom: 20.5 is exceeded once in a thousand (table value, from memory).
  expect(counts.reduce((sum, count) => sum + (count - 10_000) ** 2 / 10_000, 0)).toBeLessThan(20.5)
  expect(random.below(1)).toBe(0)
  for (let at = 0; at < 1000; at++) expect(random.fraction()).toBeLessThan(1)
})
