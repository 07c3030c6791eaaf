import { dppmAt } from '../quality/defect-level.ts'
import { type FaultCounts, testCoverage } from '../quality/test-coverage.ts'
import type { CoverageCurve } from './order.ts'
import type { SampledFaults } from './plan-pricing.ts'
import type { Pricing } from './price.ts'
import { wilsonEstimate } from './wilson.ts'

/** Between what the whole list of faults lies where a curve was quoted from a sample, at three standard deviations. */
export type SampleBand = {
  readonly size: number
  readonly population: number
  readonly seed: number
  /** Faults detected by each number of patterns, from 1, at least and at most. */
  readonly low: readonly number[]
  readonly high: readonly number[]
  readonly atCut: {
    /** Of all faults, 0..1. */
    readonly coverageLow: number
    readonly coverageHigh: number
    /** Null where escapes are reckoned by area: the sample says nothing of single blocks. */
    readonly dppmLow: number | null
    readonly dppmHigh: number | null
  }
}

/**
 * Returns the band of a curve that counts faults, estimated from a sample, and of what escapes at the cut, which is reckoned
 * from single detections: `once` is their curve. SOURCE: wilsonEstimate.
 */
export function sampleBand(
  { size, population, seed }: SampledFaults,
  { detected }: CoverageCurve,
  once: CoverageCurve,
  cut: number,
  counts: FaultCounts,
  { product, trueYield }: Pricing,
): SampleBand {
  const limitsOf = (faults: number): { low: number; high: number } => {
    const { low, high } = wilsonEstimate(Math.round((faults * size) / population), size, population)
    return { low: low * population, high: high * population }
  }
  const limits = Array.from(detected, limitsOf)
  const { low, high } = limits[cut]
  const escapes = limitsOf(once.detected[cut])
  const dppm = (faults: number): number | null =>
    product.areaShares === null ? dppmAt(testCoverage(faults, counts), { ...product, trueYield }) : null
  return {
    size,
    population,
    seed,
    low: limits.slice(1).map((each) => each.low),
    high: limits.slice(1).map((each) => each.high),
    atCut: {
      coverageLow: low / counts.all,
      coverageHigh: high / counts.all,
      dppmLow: dppm(escapes.high),
      dppmHigh: dppm(escapes.low),
    },
  }
}
