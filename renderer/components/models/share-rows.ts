export type ShareRow = { readonly block: string; readonly share: string }

/** Returns the rows of shares of area as they are kept: a line for each block, `core/alu,0.4`. */
export function shareRows(text: string): readonly ShareRow[] {
  return text
    .split('\n')
    .filter((line) => line.trim() !== '')
    .map((line) => {
      const comma = line.lastIndexOf(',')
      return { block: line.slice(0, Math.max(0, comma)).trim(), share: line.slice(comma + 1).trim() }
    })
}

/** Returns rows as they are kept; those with nothing in them are no rows. */
export function sharesAsText(rows: readonly ShareRow[]): string {
  return rows
    .filter(({ block, share }) => block.trim() !== '' || share.trim() !== '')
    .map(({ block, share }) => `${block.trim()},${share.trim()}`)
    .join('\n')
}

/** Returns what the shares add up to, without the noise of binary fractions; NaN where one is no number. */
export function sumOfShares(rows: readonly ShareRow[]): number {
  const sum = rows.reduce((total, { share }) => total + (share.trim() === '' ? 0 : Number(share)), 0)
  return Number(sum.toPrecision(9))
}
