import { expect, test } from 'vitest'
import { transposeBits } from '../../../app/engine/choose/transpose-bits.ts'
import { createRandom } from '../../../app/engine/source/random.ts'

test.each([
  [1, 1],
  [31, 2],
  [32, 16],
  [33, 17],
  [100, 40],
])('%d rows of %d words become columns', (nRows, wordsPerRow) => {
  const random = createRandom(nRows)
  const words = Uint32Array.from({ length: nRows * wordsPerRow + 5 }, () => random.bits())
  const rowAt = Uint32Array.from({ length: nRows }, (_, row) => 5 + row * wordsPerRow)
  const columns = transposeBits(words, rowAt, wordsPerRow)
  if (columns === null) throw new Error('nothing asked it to end')
  for (let row = 0; row < nRows; row++) {
    for (let column = 0; column < 32 * wordsPerRow; column++) {
      const there = (words[rowAt[row] + (column >>> 5)] >>> (column & 31)) & 1
      const here = (columns.words[column * columns.wordsPerColumn + (row >>> 5)] >>> (row & 31)) & 1
      if (here !== there) throw new Error(`row ${row}, column ${column}`)
    }
  }
  expect(columns.words.length).toBe(32 * wordsPerRow * Math.ceil(nRows / 32))
})
