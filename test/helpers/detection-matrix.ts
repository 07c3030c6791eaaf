import type { ChoiceTask } from '../../app/engine/choose/choice-task.ts'
import { freeRules } from '../../app/engine/choose/choice-rules.ts'
import type { DetectionMatrix } from '../../app/engine/simulate/detection-profile.ts'
import { createRandom } from '../../app/engine/source/random.ts'

/** Returns the matrix of rows given as lists of the patterns, from 0, that detect each. */
export function matrixOf(nPatterns: number, rows: readonly (readonly number[])[]): DetectionMatrix {
  const wordsPerRow = Math.max(1, Math.ceil(nPatterns / 512)) * 16
  const words = new Uint32Array(rows.length * wordsPerRow)
  for (const [row, patterns] of rows.entries()) {
    for (const pattern of patterns) words[row * wordsPerRow + (pattern >>> 5)] |= 1 << (pattern & 31)
  }
  return { nPatterns, nRows: rows.length, wordsPerRow, classOfRow: Uint32Array.from(rows.keys()), words }
}

/** Returns the patterns that detect each row, the inverse of matrixOf. */
export function rowsOf({ nPatterns, nRows, wordsPerRow, words }: DetectionMatrix): number[][] {
  return Array.from({ length: nRows }, (_, row) => {
    const patterns: number[] = []
    for (let pattern = 0; pattern < nPatterns; pattern++) {
      if ((words[row * wordsPerRow + (pattern >>> 5)] >>> (pattern & 31)) & 1) patterns.push(pattern)
    }
    return patterns
  })
}

/** Returns a choice without constraints that counts patterns and, unless told otherwise, faults of weight 1. */
export function freeTask(matrix: DetectionMatrix, changes: Partial<ChoiceTask> = {}): ChoiceTask {
  return {
    matrix,
    weights: new Float64Array(matrix.nRows).fill(1),
    costs: new Float64Array(matrix.nPatterns).fill(1),
    rules: freeRules(matrix.nPatterns),
    detections: 1,
    ...changes,
  }
}

/**
 * Returns a matrix with the mix that random patterns on real circuits give: the chance that a pattern detects a fault is
 * spread evenly on a logarithmic scale from about one pattern of the set to every second one.
 */
export function syntheticMatrix(nRows: number, nPatterns: number, seed: number): DetectionMatrix {
  const random = createRandom(seed)
  const rows = matrixOf(nPatterns, new Array<number[]>(nRows).fill([]))
  for (let row = 0; row < nRows; row++) {
    const chance = Math.exp(random.fraction() * Math.log(nPatterns / 2)) / nPatterns
    const skip = Math.log1p(-chance)
    const pattern = random.below(nPatterns)
    // Steps between detections are geometric; the first pattern is drawn freely so that no row stays empty.
    for (
      let at = pattern;
      at < pattern + nPatterns;
      at += 1 + Math.floor(Math.log1p(-random.fraction()) / skip)
    ) {
      const place = at % nPatterns
      rows.words[row * rows.wordsPerRow + (place >>> 5)] |= 1 << (place & 31)
    }
  }
  return rows
}
