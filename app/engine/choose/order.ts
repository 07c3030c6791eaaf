export type OrderName = 'as-delivered' | 'steepest' | 'smallest' | 'by-hand'

/** An order over all patterns of a set. */
export type Order = {
  readonly name: OrderName
  /** Length nPatterns: pattern indices from 0; those without a gain stand last, in file order, and then those left out. */
  readonly sequence: Uint32Array
  /** How many patterns at the front were chosen for a gain or are kept. As delivered: all that may run. */
  readonly chosen: number
  /** How many patterns at the front may run; the rest is left out by a constraint. */
  readonly runs: number
}

/** What an order detects: `detected[k]` is the weight of faults detected by its first k patterns; length nPatterns + 1. */
export type CoverageCurve = {
  readonly detected: Float64Array
  /** The weight of all faults of the base, by which coverage is divided. */
  readonly total: number
}
