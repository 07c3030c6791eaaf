import type { ChoiceTask } from './choice-task.ts'

/** Returns the weight of the faults that these patterns detect often enough. */
export function detectedWeight(task: ChoiceTask, patterns: ArrayLike<number>): number {
  const times = detectionsBy(task, patterns)
  let sum = 0
  for (let row = 0; row < times.length; row++) if (times[row] >= task.detections) sum += task.weights[row]
  return sum
}

/** Returns how many of these patterns detect each row of the matrix. */
export function detectionsBy({ matrix }: ChoiceTask, patterns: ArrayLike<number>): Uint32Array {
  const { nRows, wordsPerRow, words } = matrix
  const mask = new Uint32Array(wordsPerRow)
  for (let at = 0; at < patterns.length; at++) mask[patterns[at] >>> 5] |= 1 << (patterns[at] & 31)
  const times = new Uint32Array(nRows)
  for (let row = 0, at = 0; row < nRows; row++) {
    for (let word = 0; word < wordsPerRow; word++, at++) {
      for (let rest = words[at] & mask[word]; rest !== 0; rest &= rest - 1) times[row]++
    }
  }
  return times
}
