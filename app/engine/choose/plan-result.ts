import type { BandNarrowing } from '../quality/escape-band.ts'
import type { PricedInsertion } from '../quality/insertions.ts'
import type { SensitivityRow } from '../quality/sensitivity.ts'
import type { WhatIfGrid } from '../quality/what-if.ts'
import type { YieldOrigin } from '../quality/yield.ts'
import type { Cut, Goal, Limit, Stop } from './budget.ts'
import type { OrderName } from './order.ts'
import type { PointFigures } from './point-figures.ts'
import type { SampleBand } from './sample-band.ts'

/** A plan as the command line prints it in JSON and as reports and the window show it. Patterns are numbered from 1. */
export type PlanResult = {
  readonly orderName: OrderName
  /** Every pattern once, in the order; those without a gain last. */
  readonly order: readonly number[]
  /** What is detected after each applied pattern, in that order; length nPatterns. */
  readonly curve: readonly number[]
  /** The weight of all faults of the base. */
  readonly total: number
  /** ceiling[k − 1]: no k of these patterns detect more. Empty where no ceiling was worked out. */
  readonly ceiling: readonly number[]
  /** True where weights other than the number of faults were given. */
  readonly isWeighted: boolean
  /** How many patterns have to detect a fault for it to count. */
  readonly detections: number
  readonly limits: readonly Limit[]
  readonly goals: readonly Goal[]
  readonly budget: Budget
  /** The ceiling under the limit that binds, minus what is detected. Null without a ceiling. */
  readonly gap: number | null
  readonly smallest?: {
    readonly patterns: number
    /** Tester cycles of these patterns, without set-up and unload, where they were to be least; lowerBound counts them then. */
    readonly cycles?: number
    readonly lowerBound: number
    readonly proven: boolean
  }
  /** Where all of it is estimated from a sample of the faults: the sample, and between what the whole list lies. */
  readonly sample?: SampleBand
  /** True where all goals are met and no limit is broken. */
  readonly isReached: boolean
  readonly cut: Cut
  /** What ends the order where no goal does; null where every pattern with a gain fits. The marker 'limit' stands there. */
  readonly limitStop: Stop | null
  /** Points worth knowing on the same order, in ascending order of patterns. */
  readonly markers: readonly Marker[]
  /** The coverage, 0..1, that a millisecond must buy for the marker 'next millisecond'. */
  readonly worthOfMillisecond: number
  /** The patterns in file order: the shortest prefix that detects as much as the budget, and what the same limits give. */
  readonly asDelivered: {
    /** Like `curve`, for the patterns in file order. */
    readonly curve: readonly number[]
    readonly sameDetected: PointFigures | null
    readonly sameLimits: PointFigures
  }
  /** Each step of test, where the product plans several. */
  readonly insertions: readonly InsertionResult[] | null
  readonly yield: { readonly value: number; readonly origin: YieldOrigin }
  /** What the band of the escape rate would be once one input is known, narrowest first. */
  readonly bandNarrowings: readonly BandNarrowing[]
  readonly sensitivity: readonly SensitivityRow<MovedOutcome>[]
  readonly whatIf: {
    readonly chainsByShiftRate: WhatIfGrid<TimeOutcome> | null
    readonly sitesByEfficiency: WhatIfGrid<TimeOutcome>
  }
}

export type Budget = PointFigures & {
  /** The patterns that run, in applied order. */
  readonly chosen: readonly number[]
  /** Uncollapsed faults without weights and counted at the first detection; the same as `detected` where there are none. */
  readonly plainDetected: number
  readonly plainCoverage: number
}

export type InsertionResult = PricedInsertion & {
  readonly patterns: number
  readonly coverage: number
  readonly testCoverage: number
}

export type MarkerName = 'goal' | 'limit' | 'knee' | 'next millisecond' | 'least total' | 'all'

export type Marker = { readonly name: MarkerName; readonly figures: PointFigures }

/** What becomes of a plan when an input moves: the cut by the same limits and goals, and the figures at the present cut. */
export type MovedOutcome = {
  readonly patterns: number
  readonly leastTotalPatterns: number | null
  readonly leastTotal: number | null
  readonly dppm: number
  readonly perDeviceMilliseconds: number
  readonly costPerDevice: number
  readonly totalPerYear: number | null
}

export type TimeOutcome = { readonly perDeviceMilliseconds: number; readonly costPerDevice: number }
