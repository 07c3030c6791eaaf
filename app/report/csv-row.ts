export type CsvCell = string | number | null

/**
 * Returns one row of CSV with its line end, which tools of the command line want to be a line feed alone. Numbers stand
 * plain and in full, null is empty. A text that a spreadsheet would take for a formula gets an apostrophe before it.
 * SOURCE: RFC 4180; the guard is common practice.
 */
export function csvRow(cells: readonly CsvCell[], lineEnd: '\r\n' | '\n' = '\r\n'): string {
  return `${cells.map(csvCell).join(',')}${lineEnd}`
}

function csvCell(cell: CsvCell): string {
  if (cell === null) return ''
  if (typeof cell === 'number') return String(cell)
  const guarded = /^[=+\-@\t\r]/.test(cell) ? `'${cell}` : cell
  return /[",\r\n]/.test(guarded) ? `"${guarded.replaceAll('"', '""')}"` : guarded
}
