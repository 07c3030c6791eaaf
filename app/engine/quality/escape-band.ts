import { agrawalSethAgrawal, dppmWithFloor, williamsBrown } from './defect-level.ts'
import type { DefectModel, Product } from './product.ts'

/** How far inputs are taken to be off where the user gives no range: 20 %, up and down. */
export const ASSUMED_SPREAD = 0.2

export type Range = { readonly low: number; readonly high: number }

/**
 * Returns the yields to be reckoned with: the user's, else those of 20 % more and 20 % fewer defects a device. Defects
 * are moved rather than the yield itself, since a yield of 0.9 can't be 20 % higher: Y^1.2 to Y^0.8.
 * SOURCE: own derivation from the Poisson yield.
 */
export function yieldRange({ yieldRange: given }: Product, trueYield: number): Range {
  if (given !== null) return { low: given[0], high: given[1] }
  return { low: trueYield ** (1 + ASSUMED_SPREAD), high: trueYield ** (1 - ASSUMED_SPREAD) }
}

/** Returns the n0 to be reckoned with: the user's, else 20 % less, not below 1, and 20 % more. */
export function n0Range({ n0Range: given, n0 }: Product): Range {
  if (given !== null) return { low: given[0], high: given[1] }
  return { low: Math.max(1, n0 * (1 - ASSUMED_SPREAD)), high: n0 * (1 + ASSUMED_SPREAD) }
}

/** The lowest and the highest estimate at a test coverage, in DPPM with the floor. */
export type DppmBand = {
  low(coverage: number): number
  high(coverage: number): number
}

/**
 * Returns the band of the escape rate over both models and the ranges of their inputs. Both models fall as the yield
 * rises, the second as n0 rises too, so the corners of the ranges are the extremes.
 */
export function escapeCorners(product: Product, trueYield: number): DppmBand {
  return bandOver(product, yieldRange(product, trueYield), n0Range(product), 'both')
}

function bandOver(product: Product, yields: Range, n0s: Range, models: 'both' | DefectModel): DppmBand {
  const { residualDppm } = product
  const extreme =
    (choose: (a: number, b: number) => number, trueYield: number, n0: number) =>
    (coverage: number): number => {
      const one = models === 'agrawal-seth-agrawal' ? null : williamsBrown(trueYield, coverage)
      const other = models === 'williams-brown' ? null : agrawalSethAgrawal(trueYield, coverage, n0)
      return dppmWithFloor(choose(one ?? other ?? 0, other ?? one ?? 0), residualDppm)
    }
  return { low: extreme(Math.min, yields.high, n0s.high), high: extreme(Math.max, yields.low, n0s.low) }
}

export type BandInput = 'yield' | 'n0' | 'model'

export type BandNarrowing = {
  readonly input: BandInput
  /** The band that would be left if this input were known exactly. */
  readonly low: number
  readonly high: number
}

/** Returns, for each input, the band that is left once it alone is known, narrowest first. */
export function bandNarrowings(
  product: Product,
  trueYield: number,
  coverage: number,
): readonly BandNarrowing[] {
  const yields = yieldRange(product, trueYield)
  const n0s = n0Range(product)
  const knownYield = { low: trueYield, high: trueYield }
  const knownN0 = { low: product.n0, high: product.n0 }
  const bands: readonly [BandInput, DppmBand][] = [
    ['yield', bandOver(product, knownYield, n0s, 'both')],
    ['n0', bandOver(product, yields, knownN0, 'both')],
    ['model', bandOver(product, yields, n0s, product.model)],
  ]
  return bands
    .map(([input, band]) => ({ input, low: band.low(coverage), high: band.high(coverage) }))
    .sort((a, b) => a.high - a.low - (b.high - b.low))
}
