/** Returns how many rows a weights file gives, without comments, empty lines and the header. */
export function weightRows(text: string | null): number {
  const rows = (text ?? '')
    .split(/\r\n|\r|\n/)
    .map((line) => line.trim())
    .filter((line) => line !== '' && !line.startsWith('#'))
  const hasHeader = rows[0] !== undefined && !/[\d.]\s*$/.test(rows[0])
  return rows.length - (hasHeader ? 1 : 0)
}
