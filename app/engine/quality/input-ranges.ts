import type { Tester } from '../tester/tester.ts'
import type { Product, RangeInput } from './product.ts'

/** How far inputs are taken to be off where the user gives no range: 20 %, up and down. */
const ASSUMED_SPREAD = 0.2

export type Range = { readonly low: number; readonly high: number }

/**
 * Returns the values of an input to be reckoned with: the user's range, else 20 % less and more, or null where the input
 * is not known.
 */
export function inputRange(
  input: RangeInput,
  tester: Tester,
  product: Product,
  trueYield: number,
): Range | null {
  switch (input) {
    case 'yield':
      return yieldRange(product, trueYield)
    case 'n0':
      return n0Range(product)
    case 'escapeCost':
      return given(product, input) ?? (product.escapeCost === null ? null : around(product.escapeCost))
    case 'costPerHour':
      return given(product, input) ?? around(tester.costPerHour)
    case 'sites':
      return given(product, input) ?? sitesAround(tester.sites)
    case 'shiftMHz':
      return given(product, input) ?? around(tester.shiftMHz)
  }
}

/**
 * Returns the yields to be reckoned with. Where no range is given, defects are moved by 20 % rather than the yield
 * itself, since a yield of 0.9 can't be 20 % higher: Y^1.2 to Y^0.8.
 * SOURCE: own derivation from the Poisson yield.
 */
export function yieldRange(product: Product, trueYield: number): Range {
  const spread = { low: trueYield ** (1 + ASSUMED_SPREAD), high: trueYield ** (1 - ASSUMED_SPREAD) }
  return given(product, 'yield') ?? spread
}

/** Returns the n0 to be reckoned with, not below 1. */
export function n0Range(product: Product): Range {
  const { low, high } = around(product.n0)
  return given(product, 'n0') ?? { low: Math.max(1, low), high }
}

function given({ ranges }: Product, input: RangeInput): Range | null {
  const range = ranges?.[input]
  return range === undefined ? null : { low: range[0], high: range[1] }
}

function around(value: number): Range {
  return { low: value * (1 - ASSUMED_SPREAD), high: value * (1 + ASSUMED_SPREAD) }
}

/** At least one site fewer and one more. */
function sitesAround(sites: number): Range {
  const step = Math.max(1, Math.round(sites * ASSUMED_SPREAD))
  return { low: Math.max(1, sites - step), high: sites + step }
}
