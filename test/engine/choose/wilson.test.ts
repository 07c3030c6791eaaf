import { describe, expect, test } from 'vitest'
import { sampleSizeFor, wilsonEstimate } from '../../../app/engine/choose/wilson.ts'

describe('coverage from a sample', () => {
  // Source: Bushnell & Agrawal 2000, from memory: a sample of 1,000 with 88.7 % detected is accurate to about ± 3 points.
  test('of 1,000 faults with 887 detected is accurate to about 0.03', () => {
    const { low, high } = wilsonEstimate(887, 1000, 1_000_000)
    expect((high - low) / 2).toBeCloseTo(0.03, 3)
  })

  // Source: Wilson 1927 as the roots of (p − x)² = z² x (1 − x) / N, worked out here by the quadratic formula.
  test.each([
    [90, 100],
    [1, 40],
    [40, 40],
    [0, 7],
  ])('has the roots of the score equation as limits: %d of %d', (detected, sample) => {
    const share = detected / sample
    const [a, b, c] = [1 + 9 / sample, -(2 * share + 9 / sample), share * share]
    const root = Math.sqrt(Math.max(0, b * b - 4 * a * c))
    const { low, high } = wilsonEstimate(detected, sample, 1e9)
    expect(low).toBeCloseTo(Math.max(0, (-b - root) / (2 * a)), 12)
    expect(high).toBeCloseTo(Math.min(1, (-b + root) / (2 * a)), 12)
  })

  test('has no spread where the sample is the whole, and the correction begins above 5 %', () => {
    const whole = wilsonEstimate(90, 100, 100)
    expect(whole.high - whole.low).toBe(0)
    const width = (population: number): number => {
      const { low, high } = wilsonEstimate(90, 100, population)
      return high - low
    }
    expect(width(2000)).toBe(width(1e9))
    // Source: finite population correction, sqrt(1 − N/M) to first order.
    expect(width(1000) / width(1e9)).toBeCloseTo(Math.sqrt(0.9), 1)
    expect(width(1000)).toBeLessThan(width(2000))
  })

  test('holds the sample’s own share however much of the whole was drawn', () => {
    for (const population of [100, 101, 150, 199, 1000, 3000]) {
      for (const detected of [0, 1, 50, 99, 100]) {
        const { share, low, high } = wilsonEstimate(detected, 100, population)
        expect(low).toBeLessThanOrEqual(share + 1e-12)
        expect(high).toBeGreaterThanOrEqual(share - 1e-12)
      }
    }
  })
})

test('the sample size is the smallest that gives the accuracy asked', () => {
  const half = (sample: number): number => {
    const { low, high } = wilsonEstimate(0.9 * sample, sample, 1e9)
    return (high - low) / 2
  }
  const size = sampleSizeFor(0.01, 0.9, 1e9)
  expect(half(size)).toBeLessThanOrEqual(0.01)
  expect(half(size - 1)).toBeGreaterThan(0.01)
  expect(sampleSizeFor(0.001, 0.9, 500)).toBeLessThanOrEqual(500)
  expect(() => sampleSizeFor(0, 0.9, 500)).toThrow(RangeError)
})
