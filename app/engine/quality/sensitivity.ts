import type { Tester } from '../tester/tester.ts'
import { inputRange } from './input-ranges.ts'
import { type Product, RANGE_INPUTS, type RangeInput } from './product.ts'

/** A tester and a product together: everything that a price assumes. */
export type Assumptions = {
  readonly tester: Tester
  readonly product: Product
}

/** One input moved down and up, and what comes of it. */
export type SensitivityRow<Outcome> = {
  readonly input: RangeInput
  readonly low: { readonly value: number; readonly outcome: Outcome }
  readonly high: { readonly value: number; readonly outcome: Outcome }
}

/**
 * Returns what `evaluate` makes of each input at the low and at the high end of its range, all others kept. Inputs that
 * are not known are left out.
 * SOURCE: one-at-a-time sensitivity, common practice.
 */
export function sensitivityOf<Outcome>(
  assumptions: Assumptions,
  trueYield: number,
  evaluate: (assumptions: Assumptions) => Outcome,
): readonly SensitivityRow<Outcome>[] {
  return RANGE_INPUTS.flatMap((input) => {
    const range = inputRange(input, assumptions.tester, assumptions.product, trueYield)
    if (range === null) return []
    const end = (value: number) => ({ value, outcome: evaluate(withInput(assumptions, input, value)) })
    return [{ input, low: end(range.low), high: end(range.high) }]
  })
}

function withInput({ tester, product }: Assumptions, input: RangeInput, value: number): Assumptions {
  switch (input) {
    case 'yield':
      return { tester, product: withYield(product, value) }
    case 'n0':
    case 'escapeCost':
      return { tester, product: { ...product, [input]: value } }
    case 'costPerHour':
    case 'sites':
    case 'shiftMHz':
      return { tester: { ...tester, [input]: value }, product }
  }
}

/** Returns the product with that yield in place of whatever its yield came from. */
function withYield(product: Product, trueYield: number): Product {
  return {
    ...product,
    yield: trueYield,
    areaMm2: null,
    defectsPerCm2: null,
    passFraction: null,
    passCoverage: null,
  }
}
