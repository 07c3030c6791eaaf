import { capacityHours } from '../tester/tester-hours.ts'
import { withGuardBand } from '../tester/measured-time.ts'
import type { CoverageCurve } from './order.ts'
import type { PricedOrder, Pricing } from './price.ts'

/** All figures of one point of an order, in the units of files: fractions, milliseconds, the tester's currency. */
export type PointFigures = {
  readonly patterns: number
  /** Weight of the faults detected, and its share of the base. */
  readonly detected: number
  readonly coverage: number
  readonly testCoverage: number
  readonly cycles: number
  /** These patterns on one site, set-up included; then with the guard band. */
  readonly milliseconds: number
  readonly guardedMilliseconds: number
  /** The whole program's share per device, and its mean where it stops at the first fail. */
  readonly perDeviceMilliseconds: number
  readonly meanPerDeviceMilliseconds: number
  readonly vectorMemory: number
  readonly scanMemory: number
  readonly reloads: number
  readonly dppm: number
  readonly dppmWilliamsBrown: number
  readonly dppmAgrawalSethAgrawal: number
  readonly dppmLow: number
  readonly dppmHigh: number
  readonly costPerDevice: number
  /** A year; null where the product does not say enough. */
  readonly testedPerYear: number | null
  readonly hoursPerYear: number | null
  readonly capacityHoursPerYear: number | null
  readonly testCostPerYear: number | null
  readonly escapeCostPerYear: number | null
  readonly totalPerYear: number | null
}

/** Returns the figures of the first k patterns of an order. */
export function figuresAt(
  k: number,
  curve: CoverageCurve,
  priced: PricedOrder,
  { tester, product }: Pricing,
): PointFigures {
  const milliseconds = priced.milliseconds[k]
  const hoursPerYear = priced.hoursPerYear === null ? null : priced.hoursPerYear[k]
  return {
    patterns: k,
    detected: curve.detected[k],
    coverage: curve.total > 0 ? curve.detected[k] / curve.total : 0,
    testCoverage: priced.testCoverage[k],
    cycles: priced.cycles[k],
    milliseconds,
    guardedMilliseconds: withGuardBand(milliseconds, product.guardBand),
    perDeviceMilliseconds: priced.perDeviceMilliseconds[k],
    meanPerDeviceMilliseconds: priced.meanPerDeviceMilliseconds[k],
    vectorMemory: priced.vectorMemory[k],
    scanMemory: priced.scanMemory[k],
    reloads: priced.reloads[k],
    dppm: priced.dppm[k],
    dppmWilliamsBrown: priced.dppmWilliamsBrown[k],
    dppmAgrawalSethAgrawal: priced.dppmAgrawalSethAgrawal[k],
    dppmLow: priced.dppmLow[k],
    dppmHigh: priced.dppmHigh[k],
    costPerDevice: priced.costPerDevice[k],
    testedPerYear: priced.testedPerYear === null ? null : priced.testedPerYear[k],
    hoursPerYear,
    capacityHoursPerYear: hoursPerYear === null ? null : capacityHours(hoursPerYear, tester.utilisation),
    testCostPerYear: priced.testCostPerYear === null ? null : priced.testCostPerYear[k],
    escapeCostPerYear: priced.escapeCostPerYear === null ? null : priced.escapeCostPerYear[k],
    totalPerYear: priced.totalPerYear === null ? null : priced.totalPerYear[k],
  }
}
