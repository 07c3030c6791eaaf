import type { DualProblem } from './dual-problem.ts'

/** What is left of a covering problem once everything that is certain has been decided. */
export type ReducedCover = {
  /** Columns that some best solution holds: essential ones. */
  readonly chosen: number[]
  /** For each row left, its columns left. Every row has two or more. */
  readonly rows: readonly (readonly number[])[]
}

/**
 * Reduces the problem of covering all rows until nothing more is certain: a row with one column makes it essential, a
 * row whose columns include all of another's is covered with it, and a column whose rows all lie in another that costs
 * no more is never needed. Null when `goOn` said no.
 * SOURCE: the classic reductions of set covering, Garfinkel & Nemhauser 1972, chapter 8.
 */
export function reduceCover(problem: DualProblem, goOn: () => boolean): ReducedCover | null {
  const { nRows, nColumns, rowStart, rowItems, columnAt, columnEnd, columnItems, cost } = problem
  const wordsPerRow = Math.ceil(nColumns / 32)
  const bits = new Uint32Array(nRows * wordsPerRow)
  const rows: number[][] = []
  const columns: number[][] = []
  for (let row = 0; row < nRows; row++) {
    if ((row & 127) === 0 && !goOn()) return null
    const list = rowItems.slice(rowStart[row], rowStart[row + 1]).sort()
    for (const column of list) bits[row * wordsPerRow + (column >>> 5)] |= 1 << (column & 31)
    rows.push(Array.from(list))
  }
  for (let column = 0; column < nColumns; column++) {
    if ((column & 127) === 0 && !goOn()) return null
    columns.push(Array.from(columnItems.subarray(columnAt[column], columnEnd[column])))
  }
  const hasRow = new Uint8Array(nRows).fill(1)
  const hasColumn = new Uint8Array(nColumns).fill(1)
  const covers = (row: number, column: number): boolean =>
    ((bits[row * wordsPerRow + (column >>> 5)] >>> (column & 31)) & 1) === 1
  const chosen: number[] = []

  for (let isChanged = true; isChanged;) {
    isChanged = false
    for (let row = 0; row < nRows; row++) {
      if ((row & 1023) === 0 && !goOn()) return null
      if (hasRow[row] === 0) continue
      rows[row] = rows[row].filter((column) => hasColumn[column] === 1)
      if (rows[row].length > 1) continue
      const [only] = rows[row]
      chosen.push(only)
      hasColumn[only] = 0
      for (const other of columns[only]) hasRow[other] = 0
      isChanged = true
    }
    for (let column = 0; column < nColumns; column++) {
      if (hasColumn[column] === 1) columns[column] = columns[column].filter((row) => hasRow[row] === 1)
    }
    if (!goOn()) return null

    const byLength = [...rows.keys()]
      .filter((row) => hasRow[row] === 1)
      .sort((a, b) => rows[a].length - rows[b].length || a - b)
    for (const [turn, row] of byLength.entries()) {
      if ((turn & 127) === 0 && !goOn()) return null
      if (hasRow[row] === 0) continue
      const list = rows[row]
      const rarest = list.reduce((best, column) =>
        columns[column].length < columns[best].length ? column : best,
      )
      for (const other of columns[rarest]) {
        if (other === row || hasRow[other] === 0 || rows[other].length < list.length) continue
        if (!list.every((column) => covers(other, column))) continue
        hasRow[other] = 0
        isChanged = true
      }
    }
    for (let column = 0; column < nColumns; column++) {
      if (hasColumn[column] === 1) columns[column] = columns[column].filter((row) => hasRow[row] === 1)
    }
    for (let column = 0; column < nColumns; column++) {
      if ((column & 127) === 0 && !goOn()) return null
      if (hasColumn[column] === 0) continue
      const list = columns[column]
      if (list.length === 0) {
        hasColumn[column] = 0
        continue
      }
      const shortest = list.reduce((best, row) => (rows[row].length < rows[best].length ? row : best))
      for (const other of rows[shortest]) {
        if (other === column || hasColumn[other] === 0 || cost[other] > cost[column]) continue
        if (columns[other].length < list.length || !list.every((row) => covers(row, other))) continue
        hasColumn[column] = 0
        isChanged = true
        break
      }
    }
  }
  return { chosen, rows: rows.filter((_, row) => hasRow[row] === 1) }
}
