import type { CoverageCurve } from './order.ts'

/**
 * Returns the shortest prefix after which no millisecond buys `least` coverage (0..1) or more, up to `chosen`. Steps
 * longer than a millisecond count by their rate.
 * SOURCE: marginal value, own derivation: see the tests.
 */
export function nextMillisecondBuysLess(
  curve: CoverageCurve,
  milliseconds: Float64Array,
  chosen: number,
  least: number,
): number {
  let until = chosen
  for (let k = chosen - 1; k >= 0; k--) {
    while (until > k + 1 && milliseconds[until - 1] >= milliseconds[k] + 1) until--
    const gained = (curve.detected[until] - curve.detected[k]) / curve.total
    const spent = milliseconds[until] - milliseconds[k]
    if (gained >= least * Math.max(1, spent)) return k + 1
  }
  return 0
}

/** Returns the prefix of least total, the shortest of several; `chosen` is the longest that counts. */
export function leastTotal(total: Float64Array, chosen: number): number {
  let best = 0
  for (let k = 1; k <= chosen; k++) if (total[k] < total[best]) best = k
  return best
}
