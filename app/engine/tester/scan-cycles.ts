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
