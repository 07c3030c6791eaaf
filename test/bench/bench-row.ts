/** What to measure: one circuit in one mode. */
export type RowOrder = {
  readonly circuit: string
  readonly mode: 'first detection' | 'up to 10' | 'all counted' | 'all counted, 1 % X' | 'matrix'
  readonly nPatterns: number
  readonly threads: number
  readonly runs: number
  /** Whether to run the native second opinion in turn. */
  readonly yardstick: boolean
}

/** Medians over the runs. Ratios are ours to theirs in pairs a second: above 1 we are faster. */
export type RowResult = {
  readonly gates: number
  readonly faults: number
  readonly classes: number
  readonly seconds: number
  readonly pairsPerSecond: number
  readonly peakMegabytes: number
  readonly kernelMegabytes: number
  readonly toYardstick: number | null
  readonly toOneThread: number | null
  /** Pairs a second of ours over those of the slow simulation, which ran on a sample of classes and patterns. */
  readonly toTwin: number
  /** True where every fault's first pattern and count equal the yardstick's; null without it. */
  readonly agrees: boolean | null
}

export function median(values: readonly number[]): number {
  const sorted = values.toSorted((a, b) => a - b)
  const middle = sorted.length >> 1
  return sorted.length % 2 === 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2
}
