/**
 * Returns the test coverage that stands for all blocks together: Σ share_b · T_b. With Y_b = Y^(share_b) the shipped
 * quality is Π Y_b^(1−T_b) = Y^(1 − Σ share_b · T_b), so the one figure serves in 1 − Y^(1−T).
 * SOURCE: Williams & Brown 1981 for each block; the product over blocks is their independence (common practice).
 */
export function coverageByArea(shares: readonly number[], coverages: readonly number[]): number {
  return shares.reduce((sum, share, block) => sum + share * coverages[block], 0)
}
