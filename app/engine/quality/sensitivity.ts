import type { Tester } from '../tester/tester.ts'
import { ASSUMED_SPREAD, n0Range, type Range, yieldRange } from './escape-band.ts'
import type { Product } from './product.ts'

/** A tester and a product together: everything that a price assumes. */
export type Assumptions = {
  readonly tester: Tester
  readonly product: Product
}

export type SensitivityInput = 'yield' | 'n0' | 'escapeCost' | 'costPerHour' | 'sites' | 'shiftMHz'

/** One input moved down and up, and what comes of it. */
export type SensitivityRow<Outcome> = {
  readonly input: SensitivityInput
  readonly low: { readonly value: number; readonly outcome: Outcome }
  readonly high: { readonly value: number; readonly outcome: Outcome }
}

/**
 * Returns what `evaluate` makes of each input at the low and at the high end of its range, all others kept: yield and
 * n0 over the product's own ranges, the rest ± 20 %, sites at least one fewer and one more. Inputs that are not known
 * are left out.
 * SOURCE: one-at-a-time sensitivity, common practice.
 */
export function sensitivityOf<Outcome>(
  { tester, product }: Assumptions,
  trueYield: number,
  evaluate: (assumptions: Assumptions) => Outcome,
): readonly SensitivityRow<Outcome>[] {
  const row = (
    input: SensitivityInput,
    range: Range,
    moved: (value: number) => Assumptions,
  ): SensitivityRow<Outcome> => ({
    input,
    low: { value: range.low, outcome: evaluate(moved(range.low)) },
    high: { value: range.high, outcome: evaluate(moved(range.high)) },
  })
  const rows = [
    row('yield', yieldRange(product, trueYield), (value) => ({ tester, product: withYield(product, value) })),
    row('n0', n0Range(product), (n0) => ({ tester, product: { ...product, n0 } })),
    row('costPerHour', around(tester.costPerHour), (costPerHour) => ({
      tester: { ...tester, costPerHour },
      product,
    })),
    row('sites', sitesAround(tester.sites), (sites) => ({ tester: { ...tester, sites }, product })),
    row('shiftMHz', around(tester.shiftMHz), (shiftMHz) => ({ tester: { ...tester, shiftMHz }, product })),
  ]
  const { escapeCost } = product
  if (escapeCost !== null) {
    rows.push(
      row('escapeCost', around(escapeCost), (value) => ({
        tester,
        product: { ...product, escapeCost: value },
      })),
    )
  }
  return rows
}

/** Returns the product with that yield in place of whatever its yield came from. */
export function withYield(product: Product, trueYield: number): Product {
  return {
    ...product,
    yield: trueYield,
    areaMm2: null,
    defectsPerCm2: null,
    passFraction: null,
    passCoverage: null,
  }
}

function around(value: number): Range {
  return { low: value * (1 - ASSUMED_SPREAD), high: value * (1 + ASSUMED_SPREAD) }
}

function sitesAround(sites: number): Range {
  const step = Math.max(1, Math.round(sites * ASSUMED_SPREAD))
  return { low: Math.max(1, sites - step), high: sites + step }
}
