import { PATTERNS_PER_BLOCK, WORDS_PER_BLOCK, emptyPlane, type BitPlane } from '../../simulate/pattern-set.ts'

/** The word, within a row of a block, that holds a pattern; its bit there is `pattern & 31`. */
export function wordInBlock(pattern: number): number {
  return (pattern & (PATTERNS_PER_BLOCK - 1)) >>> 5
}

/** One plane while patterns are still coming: a piece of rows × WORDS_PER_BLOCK words for each block of patterns. */
export class GrowingPlane {
  private readonly rows: number
  private readonly blocks: Uint32Array[] = []

  constructor(rows: number) {
    this.rows = rows
  }

  /** The piece that a pattern is in, row-major. */
  block(pattern: number): Uint32Array {
    const at = Math.floor(pattern / PATTERNS_PER_BLOCK)
    while (this.blocks.length <= at) this.blocks.push(new Uint32Array(this.rows * WORDS_PER_BLOCK))
    return this.blocks[at]
  }

  /** Sets a pattern's first rows to 0. */
  clear(pattern: number, rows: number = this.rows): void {
    const block = this.block(pattern)
    const keep = ~(1 << (pattern & 31))
    const word = wordInBlock(pattern)
    for (let row = 0; row < rows; row++) block[row * WORDS_PER_BLOCK + word] &= keep
  }

  finish(nPatterns: number): BitPlane {
    const plane = emptyPlane(this.rows, nPatterns)
    const nBlocks = Math.min(this.blocks.length, plane.wordsPerRow / WORDS_PER_BLOCK)
    for (let at = 0; at < nBlocks; at++) {
      for (let row = 0; row < this.rows; row++) {
        const from = row * WORDS_PER_BLOCK
        const piece = this.blocks[at].subarray(from, from + WORDS_PER_BLOCK)
        plane.words.set(piece, row * plane.wordsPerRow + at * WORDS_PER_BLOCK)
      }
    }
    return plane
  }
}
