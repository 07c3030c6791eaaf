/** Columns of a bit matrix: bit `row & 31` of `words[column * wordsPerColumn + (row >> 5)]`. */
export type BitColumns = {
  readonly words: Uint32Array
  readonly wordsPerColumn: number
}

/** Words of one cache line, read together from each row. */
const LINE = 16

/**
 * Returns the columns of a bit matrix whose rows are `wordsPerRow` words from `words[rowAt[row]]`; null when `goOn`, asked
 * every few milliseconds, said no.
 * SOURCE: transposing 32 × 32 bits by halves, Warren, Hacker's Delight, section 7-3.
 */
export function transposeBits(
  words: Uint32Array,
  rowAt: Uint32Array,
  wordsPerRow: number,
  goOn: () => boolean = () => true,
): BitColumns | null {
  const nRows = rowAt.length
  const wordsPerColumn = Math.ceil(nRows / 32)
  const columns = new Uint32Array(32 * wordsPerRow * wordsPerColumn)
  const block = new Uint32Array(32)
  for (let line = 0; line < wordsPerRow; line += LINE) {
    if (!goOn()) return null
    for (let place = 0; place < wordsPerColumn; place++) {
      const height = Math.min(32, nRows - 32 * place)
      for (let word = line; word < Math.min(line + LINE, wordsPerRow); word++) {
        let any = 0
        for (let row = 0; row < height; row++) any |= block[row] = words[rowAt[32 * place + row] + word]
        if (any === 0) continue
        block.fill(0, height)
        transposeBlock(block)
        let to = 32 * word * wordsPerColumn + place
        for (let column = 0; column < 32; column++, to += wordsPerColumn) columns[to] = block[column]
      }
    }
  }
  return { words: columns, wordsPerColumn }
}

/** Bit c of word r becomes bit r of word c: swaps the off-diagonal quarters of ever smaller squares. */
function transposeBlock(block: Uint32Array): void {
  let mask = 0x0000ffff
  for (let size = 16; size > 0; size >>= 1, mask ^= mask << size) {
    for (let row = 0; row < 32; row = (row + size + 1) & ~size) {
      const swapped = ((block[row] >>> size) ^ block[row + size]) & mask
      block[row] ^= swapped << size
      block[row + size] ^= swapped
    }
  }
}
