export type WholeWeights = {
  /** Whole numbers: each weight times `scale`, rounded up. */
  readonly whole: Float64Array
  /** A power of two; 1 where the weights are whole already and not too large. */
  readonly scale: number
}

/** Sums of scaled weights stay at or below this, so that their products with counts of patterns are exact too. */
const LARGEST_SUM = 2 ** 35

/**
 * Returns weights as whole numbers, so that sums of gains are exact whatever their order and never drift. Weights that
 * are not whole, or too large together, are scaled and rounded up: bounds computed from them stay valid.
 * Throws RangeError for a weight that is negative or not finite.
 */
export function wholeWeights(weights: Float64Array): WholeWeights {
  let sum = 0
  let allWhole = true
  for (const weight of weights) {
    if (!(weight >= 0 && weight < Infinity))
      throw new RangeError(`a weight is ${weight}; 0 or more is expected`)
    sum += weight
    if (!Number.isInteger(weight)) allWhole = false
  }
  if (allWhole && sum <= LARGEST_SUM) return { whole: weights, scale: 1 }
  // Rounding up adds less than 1 to each.
  const scale = 2 ** Math.min(30, Math.floor(Math.log2((LARGEST_SUM - weights.length) / sum)))
  return { whole: weights.map((weight) => Math.ceil(weight * scale)), scale }
}
