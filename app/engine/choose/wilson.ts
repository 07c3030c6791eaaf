/** An estimate of a share, with the limits between which it lies. All 0 … 1. */
export type Estimate = { readonly share: number; readonly low: number; readonly high: number }

/** The number of standard deviations that the limits are wide: 3, as is common for fault samples. */
const Z = 3

/** Samples above this part of the population tell more than the binomial law says. */
const SMALL_PART = 0.05

/**
 * Estimates the coverage of a population of faults from a random sample of them drawn without replacement.
 * SOURCE: Wilson 1927 score interval at z = 3, clamped to 0 … 1. Where the sample N is over 5 % of the population M it counts
 * as N / (1 − N/M) draws (finite population correction), so that the half width shrinks by sqrt(1 − N/M) to first order and
 * the centre moves with it: with the half width alone corrected, the limits would leave the estimate itself out near
 * 100 %. Common practice for fault samples: Agrawal & Kato 1990.
 */
export function wilsonEstimate(detected: number, sample: number, population: number): Estimate {
  const share = detected / sample
  const { centre, half } = wilson(share, sample, population)
  return { share, low: Math.max(0, centre - half), high: Math.min(1, centre + half) }
}

/**
 * Returns the smallest sample whose estimate is accurate to ± `accuracy` where the coverage is about `expected`, at most
 * the population. Throws RangeError for an accuracy that is not above 0.
 */
export function sampleSizeFor(accuracy: number, expected: number, population: number): number {
  if (!(accuracy > 0)) throw new RangeError(`the accuracy is ${accuracy}; a number above 0 is expected`)
  let low = 1
  let high = population
  while (low < high) {
    const middle = Math.floor((low + high) / 2)
    if (wilson(expected, middle, population).half <= accuracy) high = middle
    else low = middle + 1
  }
  return low
}

function wilson(share: number, sample: number, population: number): { centre: number; half: number } {
  if (sample >= population) return { centre: share, half: 0 }
  const draws = sample > SMALL_PART * population ? sample / (1 - sample / population) : sample
  const spread = (Z * Z) / draws
  const deviation = Math.sqrt((share * (1 - share)) / draws + spread / (4 * draws))
  return { centre: (share + spread / 2) / (1 + spread), half: (Z * deviation) / (1 + spread) }
}
