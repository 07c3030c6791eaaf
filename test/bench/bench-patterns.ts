import type { Circuit } from '../../app/engine/circuit/circuit.ts'
import { emptyPlane, setBit, type PatternSet } from '../../app/engine/simulate/pattern-set.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import { randomPatterns } from '../helpers/random-run.ts'

const SEED = 2026

/** Random patterns for the bench, always the same, with that share of the input bits X. */
export function benchPatterns(circuit: Circuit, nPatterns: number, shareOfX: number): PatternSet {
  const patterns = randomPatterns(circuit, nPatterns, SEED)
  if (shareOfX === 0) return patterns
  const random = createRandom(SEED + 1)
  const unknown = emptyPlane(patterns.value.rows, nPatterns)
  for (let row = 0; row < unknown.rows; row++) {
    for (let pattern = 0; pattern < nPatterns; pattern++) {
      if (random.fraction() < shareOfX) setBit(unknown, row, pattern)
    }
  }
  const words = patterns.value.words.map((word, at) => word & ~unknown.words[at])
  return { ...patterns, value: { ...patterns.value, words }, unknown }
}
