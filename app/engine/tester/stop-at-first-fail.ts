/**
 * Returns the mean time of each prefix of a program that stops once all sites have failed; length as the inputs + 1,
 * entry 0 is 0. Step k takes `stepMs[k]` and runs unless every one of `sites` devices has failed in what is known by
 * then: `knownCoverage[k]` is the coverage of the patterns whose responses have been seen before step k starts, 0 for
 * the first. A device still passes with probability Y^T.
 * SOURCE: design of the stop rule is common practice; Y^T from Williams & Brown 1981.
 */
export function meanTimeStopAtFirstFail(
  stepMs: Float64Array,
  knownCoverage: Float64Array,
  trueYield: number,
  sites: number,
): Float64Array {
  const mean = new Float64Array(stepMs.length + 1)
  for (let k = 0; k < stepMs.length; k++) {
    mean[k + 1] = mean[k] + stepMs[k] * shareStillRunning(knownCoverage[k], trueYield, sites)
  }
  return mean
}

/** Returns the probability that at least one of `sites` devices still passes at that coverage. */
export function shareStillRunning(coverage: number, trueYield: number, sites: number): number {
  return 1 - (1 - trueYield ** coverage) ** sites
}
