/** A place in a text as people count: both from 1, the column in characters of the line. */
export type Place = {
  readonly line: number
  readonly column: number
}

export type LineIndex = {
  readonly lineStarts: Uint32Array
  placeOf(offset: number): Place
}

/**
 * Builds the table of line starts of a text, for turning offsets into places by binary search.
 * LF, CRLF and lone CR each end a line. Costs one pass; readers build it only when there is something to report.
 */
export function buildLineIndex(text: string): LineIndex {
  let starts = new Uint32Array(1024)
  let count = 1
  for (let at = 0; at < text.length; at++) {
    const code = text.charCodeAt(at)
    if (code !== 10 && code !== 13) continue
    if (code === 13 && text.charCodeAt(at + 1) === 10) at++
    if (count === starts.length) {
      const larger = new Uint32Array(starts.length * 2)
      larger.set(starts)
      starts = larger
    }
    starts[count++] = at + 1
  }
  const lineStarts = starts.slice(0, count)
  return {
    lineStarts,
    placeOf(offset) {
      let low = 0
      let high = lineStarts.length - 1
      while (low < high) {
        const middle = (low + high + 1) >> 1
        if (lineStarts[middle] <= offset) low = middle
        else high = middle - 1
      }
      return { line: low + 1, column: offset - lineStarts[low] + 1 }
    },
  }
}
