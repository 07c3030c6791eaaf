import { AppError } from '../../contract/errors.ts'
import { drawTwoSamples, type FaultSample, sampledPopulation } from '../../engine/choose/fault-sample.ts'
import { sampleSizeFor } from '../../engine/choose/wilson.ts'
import { createRandom } from '../../engine/source/random.ts'
import type { ReadFiles } from './coverage-of-files.ts'

/** How a plan is to be made from a sample of the faults. */
export type SampleRequest = {
  /** Faults in each of the two samples; null: as many as the accuracy takes. */
  readonly size: number | null
  /** Half the width of the band around a coverage, 0..1; null: not asked for. */
  readonly accuracy: number | null
  readonly seed: number
}

/** Two samples without a fault in common: orders are chosen on one, their coverage is quoted from the other. */
export type Samples = {
  readonly choose: FaultSample
  readonly quote: FaultSample
  readonly population: number
  readonly seed: number
  /** The classes of both, ascending. */
  readonly classes: Uint32Array
  /** True where nobody asked, but the record of all faults would have been too large. */
  readonly isForced: boolean
}

/** The most that the record of which pattern detects which fault may take. */
const MOST_MATRIX_BYTES = 1024 ** 3
/** What a sample is accurate to where the record of all faults is too large and nothing was asked for. */
const ACCURACY = 0.005
/** Sizes are for coverages from here up; a lower one has a wider band, which is shown. */
const EXPECTED_COVERAGE = 0.9

/**
 * Draws the samples that a plan is made from, or returns null where it is made from all faults. Throws AppError 'bad-input'
 * where even the samples' record would take more memory than it may.
 */
export function samplesOf({ faults, patterns }: ReadFiles, request: SampleRequest): Samples | null {
  const { size, accuracy, seed } = request
  const mostClasses = Math.floor((8 * MOST_MATRIX_BYTES) / patterns.nPatterns)
  const isForced = size === null && accuracy === null
  if (isForced && faults.nClasses <= mostClasses) return null
  const population = sampledPopulation(faults).length
  const wanted = size ?? sampleSizeFor(accuracy ?? ACCURACY, EXPECTED_COVERAGE, population)
  if (!isForced && 2 * wanted > mostClasses && faults.nClasses > mostClasses) {
    throw new AppError(
      'bad-input',
      `A plan keeps which of ${patterns.nPatterns} patterns detect which fault. Two samples of ${wanted} faults would take more than 1 GB; ${Math.floor(mostClasses / 2)} each is the most.`,
    )
  }
  const each = Math.min(wanted, Math.floor(mostClasses / 2))
  if (each < 1) {
    throw new AppError(
      'bad-input',
      `A plan keeps which of ${patterns.nPatterns} patterns detect which fault; not even two faults fit in 1 GB. Plan fewer patterns; "coverage" has no such limit.`,
    )
  }
  const { choose, quote } = drawTwoSamples(faults, each, createRandom(seed))
  const isIn = new Uint8Array(faults.nClasses)
  for (const group of [...choose.classes, ...quote.classes]) isIn[group] = 1
  const classes = Uint32Array.from(isIn.keys()).filter((group) => isIn[group] === 1)
  return { choose, quote, population, seed, classes, isForced }
}
