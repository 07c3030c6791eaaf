import { emptyPlane, type BitPlane, type PatternSet } from '../engine/simulate/pattern-set.ts'
import { packParts, unpackParts } from './packed.ts'

/** Written into every packed pattern set; another number is another layout. */
const LAYOUT = 1

export function packPatterns(patterns: PatternSet): Uint8Array<ArrayBuffer>[] {
  return packParts({ layout: LAYOUT, patterns })
}

/** Throws where the parts hold no pattern set of this layout. */
export function unpackPatterns(parts: readonly Uint8Array[]): PatternSet {
  const { layout, patterns } = unpackParts(parts) as { layout: number; patterns: PatternSet }
  if (layout !== LAYOUT) throw new Error(`packed patterns have the layout ${layout}; ${LAYOUT} is expected`)
  return patterns
}

/**
 * Returns patterns `from` to `to` − 1 as a set of their own, as far as simulation needs it. Both are multiples of
 * PATTERNS_PER_BLOCK, `to` may be the end.
 */
export function slicePatterns(patterns: PatternSet, from: number, to: number): PatternSet {
  const nPatterns = to - from
  const slice = (plane: BitPlane): BitPlane => {
    const cut = emptyPlane(plane.rows, nPatterns)
    for (let row = 0; row < plane.rows; row++) {
      const start = row * plane.wordsPerRow + from / 32
      cut.words.set(plane.words.subarray(start, start + cut.wordsPerRow), row * cut.wordsPerRow)
    }
    return cut
  }
  return {
    nPatterns,
    value: slice(patterns.value),
    unknown: patterns.unknown && slice(patterns.unknown),
    observed: patterns.observed && slice(patterns.observed),
    timeOnly: patterns.timeOnly?.slice(from, to) ?? null,
    expected: null,
    cycles: null,
    bursts: [{ name: '', first: 0, count: nPatterns }],
  }
}
