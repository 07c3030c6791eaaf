import type { DefectModel } from './product.ts'
import { yieldAfter } from './yield.ts'

/** Defective parts in a million, from a share. */
export const PARTS = 1_000_000

/**
 * Returns the share of shipped devices that are defective, 1 − Y^(1−T): Y the true yield of what the patterns test, T
 * the test coverage, both 0..1.
 * SOURCE: Williams & Brown 1981.
 */
export function williamsBrown(trueYield: number, coverage: number): number {
  return 1 - yieldAfter(trueYield, coverage)
}

/**
 * Returns the share of shipped devices that are defective where a defective one has n0 ≥ 1 faults on average:
 * e / (Y + e) with e = (1−T)(1−Y)e^(−(n0−1)T).
 * SOURCE: Agrawal, Seth & Agrawal 1982.
 */
export function agrawalSethAgrawal(trueYield: number, coverage: number, n0: number): number {
  const escaped = (1 - coverage) * (1 - trueYield) * Math.exp(-(n0 - 1) * coverage)
  return escaped / (trueYield + escaped)
}

/** Returns a defect level in DPPM, with the floor for defects that the fault model does not know; at most a million. */
export function dppmWithFloor(share: number, residualDppm: number): number {
  return Math.min(PARTS, PARTS * share + residualDppm)
}

/** What an escape rate is worked out from. */
export type DefectAssumptions = {
  readonly model: DefectModel
  readonly trueYield: number
  readonly n0: number
  readonly residualDppm: number
}

/** Returns the DPPM that the chosen model estimates, with the floor. */
export function dppmAt(coverage: number, { model, trueYield, n0, residualDppm }: DefectAssumptions): number {
  const share =
    model === 'williams-brown'
      ? williamsBrown(trueYield, coverage)
      : agrawalSethAgrawal(trueYield, coverage, n0)
  return dppmWithFloor(share, residualDppm)
}
