import { agrawalSethAgrawal, dppmWithFloor, PARTS, williamsBrown } from '../quality/defect-level.ts'
import { type DppmBand, escapeCorners } from '../quality/escape-band.ts'
import { passFraction } from '../quality/yield.ts'
import type { Product } from '../quality/product.ts'
import { perDeviceMs } from '../tester/multi-site.ts'
import { meanTimeStopAtFirstFail } from '../tester/stop-at-first-fail.ts'
import type { Tester } from '../tester/tester.ts'
import { costOfTime, hoursOfUse, testedDevices } from '../tester/tester-hours.ts'
import { type TimeColumns, type TimeModel, timeColumns } from '../tester/time-model.ts'
import { reloadsNeeded } from '../tester/vector-memory.ts'

/** Everything that a price stands on, apart from the order. */
export type Pricing = {
  readonly tester: Tester
  readonly product: Product
  readonly time: TimeModel
  /** The yield that resolveYield gave. */
  readonly trueYield: number
  /** The rest of the program on one site: the product's `otherMs` and the fixed rows of the program list. */
  readonly restMs: number
}

/**
 * What every prefix of an order costs and lets escape: entry k is for its first k patterns. Columns have length
 * nPatterns + 1. A year's columns are null where the product does not say how many are shipped, or what an escape costs.
 */
export type PricedOrder = TimeColumns & {
  /** Test coverage of what escapes are reckoned from: without proven untestable faults, by area where shares are given. */
  readonly testCoverage: Float64Array
  readonly reloads: Float64Array
  /** 1 where the memory must be loaded again although that is forbidden. */
  readonly isOverMemory: Uint8Array
  /** The whole program's share per device, after multi-site, index time and reloads. */
  readonly perDeviceMilliseconds: Float64Array
  /** The same where the program stops once all sites have failed: its mean. */
  readonly meanPerDeviceMilliseconds: Float64Array
  /** These patterns on one site where the program stops at the first fail: the mean. */
  readonly meanMilliseconds: Float64Array
  /** The chosen model, with the floor. */
  readonly dppm: Float64Array
  readonly dppmWilliamsBrown: Float64Array
  readonly dppmAgrawalSethAgrawal: Float64Array
  /** Lowest and highest over both models and the ranges of their inputs, with the floor. */
  readonly dppmLow: Float64Array
  readonly dppmHigh: Float64Array
  readonly costPerDevice: Float64Array
  readonly testedPerYear: Float64Array | null
  readonly hoursPerYear: Float64Array | null
  readonly testCostPerYear: Float64Array | null
  readonly escapeCostPerYear: Float64Array | null
  readonly totalPerYear: Float64Array | null
}

/**
 * Prices every prefix of a sequence of patterns in O(n). `testCoverage` has length sequence.length + 1; the result
 * keeps it.
 */
export function priceOrder(sequence: Uint32Array, testCoverage: Float64Array, pricing: Pricing): PricedOrder {
  const { tester, product, time, trueYield, restMs } = pricing
  const { sites, multiSiteEfficiency, indexMs, reloadMs } = tester
  const columns = timeColumns(time, sequence, tester.scanMemory !== null, product.otherCycles)
  const length = sequence.length + 1
  const column = (valueAt: (k: number) => number): Float64Array => {
    const values = new Float64Array(length)
    for (let k = 0; k < length; k++) values[k] = valueAt(k)
    return values
  }

  const reloads = column(
    (k) =>
      reloadsNeeded(columns.vectorMemory[k], tester.vectorMemory) +
      reloadsNeeded(columns.scanMemory[k], tester.scanMemory),
  )
  const betweenMs = (k: number): number => indexMs + reloads[k] * (reloadMs ?? 0)
  const perDevice = (k: number, patternsMs: number): number =>
    perDeviceMs(restMs + patternsMs, sites, multiSiteEfficiency, betweenMs(k))
  const perDeviceMilliseconds = column((k) => perDevice(k, columns.milliseconds[k]))

  const stepMs = columns.milliseconds.subarray(1).map((ms, k) => ms - columns.milliseconds[k])
  // A scan response is seen while the next pattern is loaded, so one pattern more runs before a fail is known.
  const known = testCoverage.subarray(0, -1).map((_, k) => testCoverage[time.isScan ? Math.max(0, k - 1) : k])
  const meanMilliseconds = meanTimeStopAtFirstFail(stepMs, known, trueYield, 1)
  const meanOnAllSites = meanTimeStopAtFirstFail(stepMs, known, trueYield, sites)

  const withFloor = (share: number): number => dppmWithFloor(share, product.residualDppm)
  const band: DppmBand = escapeCorners(product, trueYield)
  const dppmWilliamsBrown = testCoverage.map((coverage) => withFloor(williamsBrown(trueYield, coverage)))
  const dppmAgrawalSethAgrawal = testCoverage.map((coverage) =>
    withFloor(agrawalSethAgrawal(trueYield, coverage, product.n0)),
  )
  const dppm = product.model === 'williams-brown' ? dppmWilliamsBrown : dppmAgrawalSethAgrawal
  const costPerDevice = perDeviceMilliseconds.map((ms) => costOfTime(ms, tester.costPerHour))

  const { shippedPerYear, escapeCost } = product
  const testedPerYear =
    shippedPerYear === null
      ? null
      : testCoverage.map((coverage) =>
          testedDevices(shippedPerYear, passFraction(trueYield, coverage), product.retestRate),
        )
  const testCostPerYear = testedPerYear?.map((tested, k) => tested * costPerDevice[k]) ?? null
  const escapeCostPerYear =
    shippedPerYear === null || escapeCost === null
      ? null
      : dppm.map((parts) => (shippedPerYear * parts * escapeCost) / PARTS)

  return {
    ...columns,
    testCoverage,
    reloads,
    isOverMemory: Uint8Array.from(reloads, (times) => (reloadMs === null && times > 0 ? 1 : 0)),
    perDeviceMilliseconds,
    meanPerDeviceMilliseconds: column((k) => perDevice(k, meanOnAllSites[k])),
    meanMilliseconds,
    dppm,
    dppmWilliamsBrown,
    dppmAgrawalSethAgrawal,
    dppmLow: testCoverage.map((coverage) => band.low(coverage)),
    dppmHigh: testCoverage.map((coverage) => band.high(coverage)),
    costPerDevice,
    testedPerYear,
    hoursPerYear: testedPerYear?.map((tested, k) => hoursOfUse(tested, perDeviceMilliseconds[k])) ?? null,
    testCostPerYear,
    escapeCostPerYear,
    totalPerYear:
      testCostPerYear === null || escapeCostPerYear === null
        ? null
        : testCostPerYear.map((cost, k) => cost + escapeCostPerYear[k]),
  }
}
