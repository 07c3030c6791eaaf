import { AppError } from '../../contract/errors.ts'
import { drawTwoSamples, type FaultSample, sampledPopulation } from '../../engine/choose/fault-sample.ts'
import { sampleSizeFor } from '../../engine/choose/wilson.ts'
import type { DetectionProfile } from '../../engine/simulate/detection-profile.ts'
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
  /** The faults that they are drawn from: those that the whole set detects. No choice detects another. */
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
/** Sizes are for a cut that keeps this share of what the set detects, or more; a lower one has a wider band, which is shown. */
const EXPECTED_COVERAGE = 0.9

/** True where a plan is made from samples: they are asked for, or the record of all faults would be too large. */
export function needsSamples({ faults, patterns }: ReadFiles, { size, accuracy }: SampleRequest): boolean {
  return size !== null || accuracy !== null || faults.nClasses > mostClasses(patterns.nPatterns)
}

/**
 * Draws the samples that a plan is made from, among the faults that the whole set detects by its profile: what it does not
 * detect is known, so that it need not be estimated. Throws AppError 'bad-input' where even the samples' record would take
 * more memory than it may.
 */
export function samplesOf(
  { faults, patterns }: ReadFiles,
  profile: DetectionProfile,
  { size, accuracy, seed }: SampleRequest,
): Samples {
  const most = Math.floor(mostClasses(patterns.nPatterns) / 2)
  const isForced = size === null && accuracy === null
  const detected = sampledPopulation(faults).filter(
    (fault) => (profile.detections[faults.classOf[fault] ?? 0] ?? 0) > 0,
  )
  if (detected.length < 2) {
    throw new AppError('bad-input', 'These patterns detect next to nothing, so there is nothing to sample.')
  }
  // Accuracy is asked of the coverage of all faults, of which those that can be detected are a part.
  const ofDetected = ((accuracy ?? ACCURACY) * faults.nFaults) / detected.length
  const wanted = size ?? sampleSizeFor(ofDetected, EXPECTED_COVERAGE, detected.length)
  if (most < 1 || (!isForced && wanted > most && faults.nClasses > 2 * most)) {
    throw new AppError(
      'bad-input',
      `A plan keeps which of ${patterns.nPatterns} patterns detect which fault. Two samples of ${wanted} faults would take more than 1 GB; ${most} each is the most. "coverage" has no such limit.`,
    )
  }
  const { choose, quote } = drawTwoSamples(
    faults,
    Math.min(wanted, Math.max(most, 1)),
    createRandom(seed),
    detected,
  )
  const isIn = new Uint8Array(faults.nClasses)
  for (const { classes } of [choose, quote]) for (const group of classes) isIn[group] = 1
  const classes = Uint32Array.from(isIn.keys()).filter((group) => isIn[group] === 1)
  return { choose, quote, population: detected.length, seed, classes, isForced }
}

function mostClasses(nPatterns: number): number {
  return Math.floor((8 * MOST_MATRIX_BYTES) / nPatterns)
}
