import type { CoverageCurve } from './order.ts'

/**
 * Returns how many patterns lie before the knee of a curve, or null where it has none (fewer than two steps, or straight
 * as a line). `effort` is what each prefix takes, length nPatterns + 1; patterns where nothing else is given. Only the
 * part up to the last gain counts: trailing patterns without one would move the knee.
 * SOURCE: Satopaa, Albrecht, Irwin & Raghavan 2011, "Finding a kneedle in a haystack", section III with S = 1: the
 * greatest local maximum of the normalised curve minus the diagonal. The curve is exact, so it is not smoothed.
 */
export function kneeOf({ detected }: CoverageCurve, effort: Float64Array | null = null): number | null {
  let last = detected.length - 1
  while (last > 0 && detected[last] === detected[last - 1]) last--
  if (last < 2) return null
  const takes = (k: number): number => (effort === null ? k : effort[k])
  const width = takes(last) - takes(0)
  const height = detected[last] - detected[0]
  let knee = 0
  let highest = -Infinity
  for (let k = 0; k <= last; k++) {
    const difference = (detected[k] - detected[0]) / height - (takes(k) - takes(0)) / width
    if (difference <= highest) continue
    highest = difference
    knee = k
  }
  const threshold = 1 / last // S times the mean step of the normalised axis
  return highest > threshold ? knee : null
}
