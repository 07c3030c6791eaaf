import { touchdownMs } from '../tester/multi-site.ts'
import type { TimeModel } from '../tester/time-model.ts'
import type { Cut, Stop } from './budget.ts'
import type { PointFigures } from './point-figures.ts'
import type { Pricing } from './price.ts'

/** What is proven of choices: by pattern count, and within any budget of any costs. */
export type Headroom = {
  /** ceiling[k − 1]: no k of the patterns detect more. */
  readonly ceiling: Float64Array
  /** Bounds what any choice within a budget of these costs (one a pattern) detects; null where that is not worked out. */
  readonly ceilingWithin: (costs: Float64Array, budget: number) => number | null
  readonly pricing: Pricing
}

/**
 * Returns how much more any choice could detect under the limit that stops the cut: the ceiling there minus what is
 * detected. Where nothing stops it, or where the limit is no sum over patterns, the ceiling is that of as many patterns.
 */
export function headroomOf(figures: PointFigures, cut: Cut, headroom: Headroom): number {
  return Math.max(0, boundUnder(cut.stop, cut.patterns, headroom) - figures.detected)
}

function boundUnder(stop: Stop | null, patterns: number, headroom: Headroom): number {
  const { ceiling, ceilingWithin } = headroom
  const atMost = (count: number): number => (count < 1 ? 0 : ceiling[Math.min(count, ceiling.length) - 1])
  if (stop === null || ceiling.length === 0) return atMost(patterns)
  const spending = spendingUnder(stop, headroom.pricing)
  if (spending === null) return atMost(patterns)
  const { costs, budget } = spending
  if (budget < 0) return 0
  const isEven = costs.every((cost) => cost === costs[0])
  if (isEven) return atMost(Math.floor((budget / costs[0]) * (1 + 1e-12)))
  return ceilingWithin(costs, budget) ?? atMost(fittingCount(costs, budget))
}

/** The costs of patterns, and what is left for them once the cheapest burst is paid. */
export type Spending = { readonly costs: Float64Array; readonly budget: number }

/** Returns what patterns cost under a limit and what is left for them; null where the limit is no sum over patterns. */
export function spendingUnder(stop: Stop, pricing: Pricing): Spending | null {
  const { time, tester, product, restMs } = pricing
  switch (stop.kind) {
    case 'patterns':
      return { costs: new Float64Array(time.nPatterns).fill(1), budget: stop.most }
    case 'cycles':
      return { costs: time.patternCycles, budget: stop.most - time.onceCycles - smallest(time.burstCycles) }
    case 'milliseconds':
      return { costs: patternMs(time), budget: stop.most - overheadMs(time) }
    case 'deviceMilliseconds': {
      const { sites, multiSiteEfficiency, indexMs } = tester
      const oneSiteMs = (stop.most * sites - indexMs) / touchdownMs(1, sites, multiSiteEfficiency)
      return { costs: patternMs(time), budget: oneSiteMs - restMs - overheadMs(time) }
    }
    case 'leftOut':
      return null
    case 'vectorMemory':
      if (tester.vectorMemory === null || tester.scanMemory !== null) return null
      return {
        costs: time.patternCycles,
        budget: tester.vectorMemory - product.otherCycles - time.onceCycles - smallest(time.burstCycles),
      }
  }
}

function patternMs(time: TimeModel): Float64Array {
  return time.plainCycles.map((cycles, p) => {
    const correction = time.corrections[time.correctionOf[time.burstOf[p]]]
    return (cycles / time.plainKHz + time.captureCycles[p] / time.captureKHz) * correction
  })
}

function overheadMs(time: TimeModel): number {
  const bursts = time.burstCycles.map(
    (cycles, b) => (cycles / time.plainKHz) * time.corrections[time.correctionOf[b]] + time.burstSetupMs[b],
  )
  return (time.onceCycles / time.plainKHz) * Math.min(...time.corrections) + smallest(bursts)
}

function smallest(values: Float64Array): number {
  return values.reduce((least, value) => Math.min(least, value), Infinity)
}

/** Returns how many of the cheapest patterns fit a budget: no choice within it has more. */
function fittingCount(costs: Float64Array, budget: number): number {
  const cheapest = costs.slice().sort()
  let spent = 0
  let count = 0
  while (count < cheapest.length && spent + cheapest[count] <= budget) spent += cheapest[count++]
  return count
}
