/**
 * Returns the factor by which computed times are multiplied, from one burst's measured and computed milliseconds; 1
 * where the computed time is 0, since nothing can be told from it.
 * SOURCE: common practice.
 */
export function correctionFactor(measuredMs: number, computedMs: number): number {
  return computedMs > 0 ? measuredMs / computedMs : 1
}

/** Returns a time with its guard band, a share such as 0.05. SOURCE: common practice. */
export function withGuardBand(milliseconds: number, guardBand: number): number {
  return milliseconds * (1 + guardBand)
}
