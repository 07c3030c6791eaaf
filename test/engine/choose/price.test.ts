import { expect, test } from 'vitest'
import { type Pricing, priceOrder } from '../../../app/engine/choose/price.ts'
import { DEFAULT_PRODUCT, type Product } from '../../../app/engine/quality/product.ts'
import { DEFAULT_TESTER, type Tester } from '../../../app/engine/tester/tester.ts'
import { buildTimeModel } from '../../../app/engine/tester/time-model.ts'

const COVERAGE = Float64Array.of(0, 0.6, 0.9, 0.95)

function price(tester: Partial<Tester>, product: Partial<Product>, flipFlops = 0, coverage = COVERAGE) {
  const wholeTester = { ...DEFAULT_TESTER, vectorMHz: 0.001, ...tester }
  const wholeProduct = { ...DEFAULT_PRODUCT, residualDppm: 0, ...product }
  const nPatterns = coverage.length - 1
  const pricing: Pricing = {
    tester: wholeTester,
    product: wholeProduct,
    time: buildTimeModel(
      wholeTester,
      wholeProduct,
      { nPatterns, bursts: [{ name: 'all', first: 0, count: nPatterns }], cycles: null },
      { flipFlops, tracedChains: null, tracedLongest: null },
    ),
    trueYield: wholeProduct.yield ?? 0.5,
    restMs: wholeProduct.otherMs,
  }
  return priceOrder(
    Uint32Array.from({ length: nPatterns }, (_, p) => p),
    coverage,
    pricing,
  )
}

// By hand (common practice, no source): 3 vectors at 1 kHz and 397 ms of other tests = 400 ms on one site; on 8 sites
// at 0.95 540 ms; with 200 ms of index time (540 + 200) / 8 = 92.5 ms; at 60 an hour 0.0015417.
test('the whole program is shared by the sites', () => {
  const tester = { sites: 8, multiSiteEfficiency: 0.95, indexMs: 200, costPerHour: 60 }
  const priced = price(tester, { otherMs: 397 })
  expect(priced.milliseconds[3]).toBe(3)
  expect(priced.perDeviceMilliseconds[3]).toBeCloseTo(92.5, 9)
  expect(priced.costPerDevice[3]).toBeCloseTo(0.0015417, 7)
  expect(priced.perDeviceMilliseconds[0]).toBeCloseTo((397 * 1.35 + 200) / 8, 9)
})

// Source: Williams & Brown 1981; Agrawal, Seth & Agrawal 1982: Y = 0.5, T = 0.95, n0 = 2: 34,064 and 18,970 DPPM.
test('both models stand side by side, inside their band', () => {
  const priced = price({}, { n0: 2 })
  expect(Math.round(priced.dppmWilliamsBrown[3])).toBe(34_064)
  expect(Math.round(priced.dppmAgrawalSethAgrawal[3])).toBe(18_970)
  expect(priced.dppm[3]).toBe(priced.dppmWilliamsBrown[3])
  expect(price({}, { n0: 2, model: 'agrawal-seth-agrawal' }).dppm[3]).toBe(priced.dppmAgrawalSethAgrawal[3])
  // By hand: Williams & Brown at Y = 0.5^1.2: x = 0.0415888, x − x²/2 + x³/6 =
  // 0.040736; the other model at n0 = 2.4, Y = 0.5^0.8 =
  // 0.57435: 0.05 × 0.42565 × e^(−1.33) = 0.0056288; / (0.57435 + 0.0056288) = 9,705.
  expect(Math.round(priced.dppmHigh[3])).toBe(40_736)
  expect(priced.dppmLow[3]).toBeCloseTo(9705, -1)
})

test('the escape rate ends at the floor, never at nothing', () => {
  const priced = price({}, { residualDppm: 4 }, 0, Float64Array.of(0, 1))
  expect([priced.dppm[1], priced.dppmLow[1], priced.dppmHigh[1]]).toEqual([4, 4, 4])
})

// By hand: 0.5^0.95 = 0.51763 pass; 1,000,000 shipped take 1,931,873 tests, of 1.2 s: 643.96 h at 100 = 64,396;
// 34,063.67 escapes at 20 cost 681,273.
test('a year has its tests, hours, costs and their sum', () => {
  const tester = { costPerHour: 100 }
  const priced = price(tester, { otherMs: 1197, shippedPerYear: 1_000_000, escapeCost: 20 })
  expect(Math.round(priced.testedPerYear![3])).toBe(1_931_873)
  expect(priced.hoursPerYear![3]).toBeCloseTo(643.96, 2)
  expect(priced.testCostPerYear![3]).toBeCloseTo(64_396, 0)
  expect(priced.escapeCostPerYear![3]).toBeCloseTo(681_273, 0)
  expect(priced.totalPerYear![3]).toBe(priced.testCostPerYear![3] + priced.escapeCostPerYear![3])
})

test('a year is not worked out without a volume, nor escapes without their cost', () => {
  const withoutVolume = price({}, { escapeCost: 20 })
  expect([withoutVolume.testCostPerYear, withoutVolume.escapeCostPerYear]).toEqual([null, null])
  const withoutCost = price({}, { shippedPerYear: 1000 })
  expect(withoutCost.testCostPerYear).not.toBeNull()
  expect([withoutCost.escapeCostPerYear, withoutCost.totalPerYear]).toEqual([null, null])
})

test('past the memory the tester loads again, or must not', () => {
  const allowed = price({ vectorMemory: 2, reloadMs: 500 }, {})
  expect([...allowed.reloads]).toEqual([0, 0, 0, 1])
  expect([...allowed.isOverMemory]).toEqual([0, 0, 0, 0])
  expect(allowed.milliseconds[3]).toBe(3)
  expect(allowed.perDeviceMilliseconds[3]).toBe(503)
  expect([...price({ vectorMemory: 2 }, {}).isOverMemory]).toEqual([0, 0, 0, 1])
})

// By hand, steps of 1 ms, Y = 0.5, coverages before each 0, 0.6, 0.9: 1 + 0.5^0.6 + 0.5^0.9 = 2.19564. Where the
// circuit is scanned a fail shows one unload later: before the steps 0, 0, 0.6 are known.
test('stopping at the first fail saves time, one unload later where scanned', () => {
  expect(price({}, {}).meanMilliseconds[3]).toBeCloseTo(2.19564, 5)
  // L = 1: 2 shifts and a capture first (the burst's unload counted at its start), then 1 and 1: 3, 2, 2 ms at 1 kHz.
  const scanned = price({ shiftMHz: 0.001 }, {}, 1)
  expect([...scanned.milliseconds]).toEqual([0, 3, 5, 7])
  expect(scanned.meanMilliseconds[3]).toBeCloseTo(3 + 2 + 2 * 0.5 ** 0.6, 9)
})

// By hand on 2 sites at an efficiency of 0.9: mean one-site time on which either passes, × 1.1, / 2.
test('stopping at the first fail on two sites waits for both', () => {
  const running = (coverage: number): number => 1 - (1 - 0.5 ** coverage) ** 2
  const priced = price({ sites: 2, multiSiteEfficiency: 0.9 }, {})
  const mean = running(0) + running(0.6) + running(0.9)
  expect(priced.meanPerDeviceMilliseconds[3]).toBeCloseTo((mean * 1.1) / 2, 9)
})

test('100,000 patterns are priced in one pass', () => {
  const coverage = Float64Array.from({ length: 100_001 }, (_, k) => k / 100_001)
  const priced = price({}, {}, 0, coverage)
  expect(priced.milliseconds[100_000]).toBe(100_000)
})
