/**
 * Returns how often a touchdown loads the memory again: `used` cycles per pin over a depth of `depth`; null is
 * unlimited. What is exactly as long as the memory fits. The first part counts as loaded before the touchdown.
 * SOURCE: common practice.
 */
export function reloadsNeeded(used: number, depth: number | null): number {
  return depth === null || used <= depth ? 0 : Math.ceil(used / depth) - 1
}
