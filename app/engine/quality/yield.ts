import { ASSUMED_YIELD, type Product } from './product.ts'

/** Returns the yield of independent defects: e^(−D·A). SOURCE: Poisson yield, common practice. */
export function poissonYield(defectsPerCm2: number, areaCm2: number): number {
  return Math.exp(-defectsPerCm2 * areaCm2)
}

/**
 * Returns the yield of clustered defects: (1 + D·A/α)^(−α), which tends to the Poisson yield as α grows.
 * SOURCE: negative binomial yield, Stapper 1973 (from memory).
 */
export function negativeBinomialYield(defectsPerCm2: number, areaCm2: number, clustering: number): number {
  return (1 + (defectsPerCm2 * areaCm2) / clustering) ** -clustering
}

/**
 * Returns the true yield from a measured pass fraction P at test coverage T: P^(1/T), since P = Y^T.
 * SOURCE: Williams & Brown 1981. T is above 0.
 */
export function yieldFromPassFraction(passFraction: number, coverage: number): number {
  return passFraction ** (1 / coverage)
}

/** Returns the share of devices that pass tests of coverage T: Y^T. SOURCE: Williams & Brown 1981. */
export function passFraction(trueYield: number, coverage: number): number {
  return trueYield ** coverage
}

/** Returns the yield of what has passed tests of coverage T: Y^(1−T). SOURCE: Williams & Brown 1981. */
export function yieldAfter(trueYield: number, coverage: number): number {
  return trueYield ** (1 - coverage)
}

export type YieldOrigin = 'given' | 'area and defect density' | 'pass fraction' | 'assumed'

/**
 * Returns a product's true yield and where it comes from. `deliveredCoverage` is the test coverage of the whole set as
 * delivered, for a pass fraction that does not say under which it was measured. From a pass fraction without any
 * coverage (0) no yield follows: it is assumed.
 */
export function resolveYield(
  product: Product,
  deliveredCoverage: number,
): { readonly value: number; readonly origin: YieldOrigin } {
  if (product.yield !== null) return { value: product.yield, origin: 'given' }
  if (product.areaMm2 !== null && product.defectsPerCm2 !== null) {
    const areaCm2 = product.areaMm2 / 100
    const value =
      product.clustering === null
        ? poissonYield(product.defectsPerCm2, areaCm2)
        : negativeBinomialYield(product.defectsPerCm2, areaCm2, product.clustering)
    return { value, origin: 'area and defect density' }
  }
  const coverage = product.passCoverage ?? deliveredCoverage
  if (product.passFraction !== null && coverage > 0) {
    return { value: yieldFromPassFraction(product.passFraction, coverage), origin: 'pass fraction' }
  }
  return { value: ASSUMED_YIELD, origin: 'assumed' }
}
