import type { FaultList } from '../faults/fault-list.ts'
import { coverageByArea } from '../quality/area-shares.ts'
import { sortIntoBlocks } from '../quality/block-coverage.ts'
import { countFaults } from '../quality/count-faults.ts'
import type { Product } from '../quality/product.ts'
import type { Assumptions } from '../quality/sensitivity.ts'
import { type FaultCounts, testCoverage } from '../quality/test-coverage.ts'
import { resolveYield } from '../quality/yield.ts'
import { burstMeasures, matchProgram, type ProgramRow } from '../tester/program.ts'
import type { Tester } from '../tester/tester.ts'
import { buildTimeModel, type PatternFacts, type ScanFacts } from '../tester/time-model.ts'
import type { ChoiceTask } from './choice-task.ts'
import { curveOf } from './coverage-curve.ts'
import { detectedWeight } from './detected-weight.ts'
import type { CoverageCurve, Order } from './order.ts'
import type { Pricing } from './price.ts'

/** What prices stand on, whatever the order: faults, patterns, tester, product and the program around the patterns. */
export type PlanBasis = {
  readonly faults: FaultList
  /** Length faults.nClasses: 1 where the class is proven untestable with free inputs. Null: nothing was proven. */
  readonly untestable: Uint8Array | null
  /** The choice that orders are made for: its matrix, weights, constraints and number of detections. */
  readonly task: ChoiceTask
  readonly patterns: PatternFacts
  /** The name of the pattern file, by which a row of the program list may mean it. */
  readonly patternFile: string
  readonly scan: ScanFacts
  readonly tester: Tester
  readonly product: Product
  readonly program: readonly ProgramRow[]
  /** What the matrix of the task holds where it is of a sample; absent where it is of all faults. */
  readonly sample?: SampledFaults
}

/** A random sample of faults in place of them all; counts made from it are estimates of the whole list's. */
export type SampledFaults = {
  /** Faults drawn. */
  readonly size: number
  /** Faults that they were drawn from: those that the whole set detects. */
  readonly population: number
  readonly seed: number
  /** Length nClasses: how many faults of the population each class stands for. */
  readonly standsFor: Float64Array
}

/** How orders over one basis are priced. */
export type PlanPricing = {
  readonly counts: FaultCounts
  readonly pricing: Pricing
  /** The same for another tester and product; corrections measured stay as they are. */
  readonly pricingFor: (assumptions: Assumptions) => Pricing
  /** The choice with every fault counted once and plainly: what escapes are reckoned from. */
  readonly plainTask: ChoiceTask
  /** True where the task's weights are not the numbers of faults. */
  readonly isWeighted: boolean
  /** Test coverage of all patterns together. */
  readonly deliveredCoverage: number
  /**
   * The test coverage of each prefix of an order that escapes are reckoned from, by area where the product gives shares;
   * `plainCurve` is the order's curve of plainTask.
   */
  readonly coverageOf: (order: Order, plainCurve: CoverageCurve) => Float64Array
}

/** Works out how orders over a basis are priced. */
export function planPricing(basis: PlanBasis): PlanPricing {
  const { faults, untestable, task, tester, product } = basis
  const counts = countFaults(faults, untestable)
  const ofClass = basis.sample?.standsFor ?? faults.classSize
  const weights = Float64Array.from(task.matrix.classOfRow, (one) => ofClass[one])
  const plainTask = { ...task, weights, detections: 1 }
  const everyPattern = Uint32Array.from({ length: task.matrix.nPatterns }, (_, pattern) => pattern)
  const deliveredCoverage = testCoverage(detectedWeight(plainTask, everyPattern), counts)
  const pricingFor = pricingOf(basis, deliveredCoverage)
  return {
    counts,
    pricing: pricingFor({ tester, product }),
    pricingFor,
    plainTask,
    isWeighted: task.weights.some((weight, row) => weight !== weights[row]),
    deliveredCoverage,
    coverageOf: coveragesForQuality(basis, plainTask, counts),
  }
}

/** Returns a function from a tester and a product to what prices stand on; measured corrections stay as they are. */
function pricingOf(
  { patterns, patternFile, scan, tester, product, program }: PlanBasis,
  deliveredCoverage: number,
): (assumptions: Assumptions) => Pricing {
  const facts = matchProgram(program, patterns, patternFile)
  const uncorrected = { ...product, timeCorrection: 1, chainTest: false }
  const computed = buildTimeModel(tester, uncorrected, patterns, scan)
  const general = { setupMs: product.setupMs, correction: product.timeCorrection }
  const measures = burstMeasures(facts, patterns, computed, general)
  return (moved) => ({
    ...moved,
    time: buildTimeModel(moved.tester, moved.product, patterns, scan, measures),
    trueYield: resolveYield(moved.product, deliveredCoverage).value,
    restMs: moved.product.otherMs + facts.fixedMs,
  })
}

/**
 * Returns a function from an order, with its curve of plain faults, to the test coverage of each prefix that escapes are
 * reckoned from: over all faults, or by area where the product gives shares.
 */
function coveragesForQuality(
  { faults, untestable, product, sample }: PlanBasis,
  plainTask: ChoiceTask,
  counts: FaultCounts,
): (order: Order, plainCurve: CoverageCurve) => Float64Array {
  if (product.areaShares === null) {
    return (_, { detected }) => detected.map((count) => testCoverage(count, counts))
  }
  const shares = product.areaShares.map(({ share }) => share)
  const { blockOf, classWeights } = sortIntoBlocks(faults, product.areaShares)
  const blockCounts = shares.map((_, block) =>
    countFaults(faults, untestable, (fault) => blockOf[fault] === block),
  )
  return (order) => {
    const curves = classWeights.map((weights) => {
      const task = {
        ...plainTask,
        weights: Float64Array.from(plainTask.matrix.classOfRow, (one) =>
          sample === undefined
            ? weights[one]
            : (weights[one] * sample.standsFor[one]) / faults.classSize[one],
        ),
      }
      return curveOf(task, order, 0).detected
    })
    return Float64Array.from(curves[0], (_, k) =>
      coverageByArea(
        shares,
        curves.map((detected, block) => testCoverage(detected[k], blockCounts[block])),
      ),
    )
  }
}
