import type { OrderColumns } from '../../../app/contract/shapes/budget.ts'

export type SortKey = 'position' | 'pattern' | 'gain' | 'coverage' | 'milliseconds' | 'dppm' | 'alone'

/**
 * Returns the positions, from 0, of the rows that are shown, in their order; null where that is every pattern as it is
 * applied. Coverage, time and escapes go along with the position.
 */
export function sortedRows(
  columns: OrderColumns,
  detected: Float64Array,
  { key, isDown }: { readonly key: SortKey; readonly isDown: boolean },
  wanted: string,
): Uint32Array | null {
  const digits = wanted.trim()
  if (key === 'position' && !isDown && digits === '') return null
  let rows = Uint32Array.from({ length: columns.patterns }, (_, at) => at)
  if (digits !== '') rows = rows.filter((at) => String(columns.pattern[at]).startsWith(digits))
  const value = valueOf(columns, detected, key)
  const sign = isDown ? -1 : 1
  return rows.sort((a, b) => sign * (value(a) - value(b)) || a - b)
}

function valueOf(columns: OrderColumns, detected: Float64Array, key: SortKey): (at: number) => number {
  switch (key) {
    case 'pattern':
      return (at) => columns.pattern[at] ?? 0
    case 'gain':
      return (at) => (detected[at + 1] ?? 0) - (detected[at] ?? 0)
    case 'alone':
      return (at) => columns.detectsAlone[at] ?? 0
    case 'dppm':
      return (at) => columns.dppm[at + 1] ?? 0
    default:
      return (at) => at
  }
}
