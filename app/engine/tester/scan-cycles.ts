/**
 * Returns the shift cycles of a contiguous burst of `patterns` over a longest chain of `length` bits: each load runs
 * while the response before it is unloaded, and one unload follows the last. 0 for no patterns.
 * SOURCE: Bushnell & Agrawal 2000, the chapter on scan test length (from memory).
 */
export function scanShiftCycles(patterns: number, length: number): number {
  return patterns === 0 ? 0 : (patterns + 1) * length
}

/**
 * Returns the shift cycles of a chain test: the chain filled once and four bits more, so that both values pass both
 * transitions through every cell.
 * SOURCE: Bushnell & Agrawal 2000, the chapter on scan test length (from memory).
 */
export function chainTestCycles(length: number): number {
  return length + 4
}

/**
 * Returns the longest chain of that many flip-flops in that many balanced chains.
 * SOURCE: common practice.
 */
export function balancedChainLength(flipFlops: number, chains: number): number {
  return Math.ceil(flipFlops / chains)
}
