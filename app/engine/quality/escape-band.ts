import { agrawalSethAgrawal, dppmWithFloor, williamsBrown } from './defect-level.ts'
import { n0Range, type Range, yieldRange } from './input-ranges.ts'
import type { DefectModel, Product } from './product.ts'

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
