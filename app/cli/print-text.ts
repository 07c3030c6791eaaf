import { numberFormats } from '../contract/format-number.ts'

/** Figures as the command line shows them to people. */
export const formats = numberFormats('en')

/** Returns labels and what they stand for as two columns. */
export function aligned(rows: readonly (readonly [string, string])[]): string {
  const width = Math.max(...rows.map(([label]) => label.length)) + 2
  return rows.map(([label, text]) => `${label.padEnd(width)}${text}`).join('\n')
}
