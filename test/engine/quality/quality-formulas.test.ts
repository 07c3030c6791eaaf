import { describe, expect, test } from 'vitest'
import { coverageByArea } from '../../../app/engine/quality/area-shares.ts'
import { agrawalSethAgrawal, dppmAt, williamsBrown } from '../../../app/engine/quality/defect-level.ts'
import { DEFAULT_PRODUCT } from '../../../app/engine/quality/product.ts'
import { faultCoverage, testCoverage } from '../../../app/engine/quality/test-coverage.ts'
import {
  negativeBinomialYield,
  passFraction,
  poissonYield,
  resolveYield,
  yieldFromPassFraction,
} from '../../../app/engine/quality/yield.ts'

describe('defect level', () => {
  // Source: Williams & Brown 1981. By hand: 1 − 0.5^0.05 = 1 − e^(−0.0346574) = 0.0340637.
  test('of Williams & Brown at a yield of 0.5 and a coverage of 0.95 is 3.41 %, 34,064 DPPM', () => {
    expect(williamsBrown(0.5, 0.95)).toBeCloseTo(0.0341, 4)
    expect(Math.round(1e6 * williamsBrown(0.5, 0.95))).toBe(34_064)
  })

  // Source: Agrawal, Seth & Agrawal 1982. By hand for n0 = 1: 0.05 × 0.5 / (0.5 + 0.025) = 0.0476190.
  test.each([
    [1, 47_619],
    [2, 18_970],
    [3, 7423],
  ])('of Agrawal, Seth & Agrawal with n0 = %d is %d DPPM at the same point', (n0, dppm) => {
    expect(Math.round(1e6 * agrawalSethAgrawal(0.5, 0.95, n0))).toBe(dppm)
  })

  // Source: the published example of Agrawal, Seth & Agrawal 1982 (from memory): about 1 %.
  test('of Agrawal, Seth & Agrawal at a yield of 0.07, n0 = 8 and a coverage of 0.80 is about 1 %', () => {
    expect(agrawalSethAgrawal(0.07, 0.8, 8)).toBeGreaterThan(0.009)
    expect(agrawalSethAgrawal(0.07, 0.8, 8)).toBeLessThan(0.011)
  })

  test.each(['williams-brown', 'agrawal-seth-agrawal'] as const)(
    'of %s ends at the floor with full coverage, and at 1 − Y without any',
    (model) => {
      const assumptions = { model, trueYield: 0.9, n0: 3, residualDppm: 5 }
      expect(dppmAt(1, assumptions)).toBe(5)
      expect(dppmAt(0, assumptions)).toBeCloseTo(100_005, 6)
    },
  )

  test('never passes a million', () => {
    expect(dppmAt(0, { model: 'williams-brown', trueYield: 1e-9, n0: 1, residualDppm: 1e6 })).toBe(1e6)
  })
})

describe('yield', () => {
  // By hand: D·A = 0.5 × 0.4 = 0.2; e^−0.2 = 0.81873; with α = 2: 1.1^−2 = 0.82645.
  test('from defect density and area', () => {
    expect(poissonYield(0.5, 0.4)).toBeCloseTo(0.81873, 5)
    expect(negativeBinomialYield(0.5, 0.4, 2)).toBeCloseTo(0.82645, 5)
  })

  test('of clustered defects tends to Poisson as clustering fades', () => {
    expect(negativeBinomialYield(0.5, 0.4, 1e6)).toBeCloseTo(poissonYield(0.5, 0.4), 6)
  })

  // Source: Williams & Brown 1981, P = Y^T. By hand: 0.8^0.95 = 0.80897.
  test('and pass fraction are two sides of one formula', () => {
    expect(passFraction(0.8, 0.95)).toBeCloseTo(0.80897, 4)
    expect(yieldFromPassFraction(passFraction(0.8, 0.95), 0.95)).toBeCloseTo(0.8, 12)
  })

  test('comes from what the product gives, and says so', () => {
    const from = (given: object) => resolveYield({ ...DEFAULT_PRODUCT, ...given }, 0.95)
    expect(from({})).toEqual({ value: 0.9, origin: 'assumed' })
    expect(from({ yield: 0.7 })).toEqual({ value: 0.7, origin: 'given' })
    expect(from({ areaMm2: 40, defectsPerCm2: 0.5 }).value).toBeCloseTo(0.81873, 5)
    expect(from({ areaMm2: 40, defectsPerCm2: 0.5, clustering: 2 }).value).toBeCloseTo(0.82645, 5)
    expect(from({ passFraction: 0.80897 })).toEqual({
      value: expect.closeTo(0.8, 4),
      origin: 'pass fraction',
    })
    expect(from({ passFraction: 0.64, passCoverage: 0.5 }).value).toBeCloseTo(0.64 ** 2, 12)
  })

  test('is assumed where a pass fraction was measured without any coverage', () => {
    const product = { ...DEFAULT_PRODUCT, passFraction: 0.8 }
    expect(resolveYield(product, 0)).toEqual({ value: 0.9, origin: 'assumed' })
  })
})

describe('coverage', () => {
  // Common practice, no source. 90 of 100 detected, 4 untestable, 6 by the chain test.
  const counts = { all: 100, untestable: 4, byChainTest: 6 }

  test('of faults is on all of them, of tests on those that patterns could detect', () => {
    expect(faultCoverage(81, counts)).toBe(0.81)
    expect(testCoverage(81, counts)).toBe(0.9)
  })

  test('of nothing is 0', () => {
    expect(faultCoverage(0, { all: 0, untestable: 0, byChainTest: 0 })).toBe(0)
    expect(testCoverage(0, { all: 4, untestable: 4, byChainTest: 0 })).toBe(0)
  })

  // By hand: Y = 0.5, shares 0.75 and 0.25, coverages 0.98 and 0.9. Y_b = 0.5^0.75 and 0.5^0.25; shipped good:
  // 0.5^(0.75 × 0.02) × 0.5^(0.25 × 0.1) = 0.5^0.04 = 0.97265; so DL = 0.0277259 − 0.0003844 + 0.0000036 = 0.027345.
  test('by area gives the defect level of the blocks together', () => {
    const product = (0.5 ** 0.75) ** (1 - 0.98) * (0.5 ** 0.25) ** (1 - 0.9)
    const together = williamsBrown(0.5, coverageByArea([0.75, 0.25], [0.98, 0.9]))
    expect(together).toBeCloseTo(1 - product, 12)
    expect(Math.round(1e6 * together)).toBe(27_345)
  })
})
