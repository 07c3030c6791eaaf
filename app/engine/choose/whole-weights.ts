export type WholeWeights = {
  /** Whole numbers: each weight times `scale`, rounded up. */
  readonly whole: Float64Array
  /** A power of two; 1 where the weights are whole already. */
  readonly scale: number
}

/**
 * Returns weights as whole numbers, so that sums of gains are exact whatever their order and never drift. Weights that
 * are not whole are scaled so that their sum stays below 2^40, and rounded up: bounds computed from them stay valid.
 * Throws RangeError for a weight that is negative or not finite, or a sum over 2^40.
 */
export function wholeWeights(weights: Float64Array): WholeWeights {
  let sum = 0
  let allWhole = true
  for (const weight of weights) {
    if (!(weight >= 0)) throw new RangeError(`a weight is ${weight}; 0 or more is expected`)
    sum += weight
    if (!Number.isInteger(weight)) allWhole = false
  }
  if (sum > 2 ** 40) throw new RangeError(`the weights add up to ${sum}, more than 2^40`)
  if (allWhole) return { whole: weights, scale: 1 }
  const scale = 2 ** Math.min(30, Math.floor(39 - Math.log2(sum + weights.length)))
  return { whole: weights.map((weight) => Math.ceil(weight * scale)), scale }
}
