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
    readonly dppmLow: number
    readonly dppmHigh: number
  }
}

/** Returns the band of a curve that counts plain faults, estimated from a sample. SOURCE: wilsonEstimate. */
export function sampleBand(
  { size, population, seed }: SampledFaults,
  { detected }: CoverageCurve,
  cut: number,
  counts: FaultCounts,
  { product, trueYield }: Pricing,
): SampleBand {
  const limits = Array.from(detected, (faults) => {
    const { low, high } = wilsonEstimate(Math.round((faults * size) / population), size, population)
    return { low: low * population, high: high * population }
  })
  const { low, high } = limits[cut]
  const dppm = (faults: number): number => dppmAt(testCoverage(faults, counts), { ...product, trueYield })
  return {
    size,
    population,
    seed,
    low: limits.slice(1).map((each) => each.low),
    high: limits.slice(1).map((each) => each.high),
    atCut: {
      coverageLow: low / counts.all,
      coverageHigh: high / counts.all,
      dppmLow: dppm(high),
      dppmHigh: dppm(low),
    },
  }
}
