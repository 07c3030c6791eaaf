/** How many faults (uncollapsed) stand in each account from which coverages are quoted. */
export type FaultCounts = {
  readonly all: number
  /** Proven untestable with free inputs: they can do no harm, so they leave the base of the escape rate. */
  readonly untestable: number
  /** Exercised by the chain test: neither detected by patterns nor missed by them. */
  readonly byChainTest: number
}

/**
 * Returns the share of all faults that are detected; 0 where there are none.
 * SOURCE: common practice.
 */
export function faultCoverage(detected: number, { all }: FaultCounts): number {
  return all > 0 ? detected / all : 0
}

/**
 * Returns the share of testable faults that are detected, the T of the defect-level models; 0 where there are none. The
 * faults that the chain test exercises stand outside: on a line of their own in every account.
 * SOURCE: common practice.
 */
export function testCoverage(detected: number, { all, untestable, byChainTest }: FaultCounts): number {
  const base = all - untestable - byChainTest
  return base > 0 ? Math.min(1, detected / base) : 0
}
