import type { Writable } from 'node:stream'
import { numberFormats } from '../contract/format-number.ts'

/** Figures as the command line shows them to people. */
export const formats = numberFormats('en')

/** Prints text for people. */
export function printText(text: string, stdout: Writable): void {
  stdout.write(`${plainSpaces(text)}\n`)
}

/** Terminals and those who search their output want spaces that are no others. */
export function plainSpaces(text: string): string {
  return text.replaceAll('\u00a0', ' ')
}

/** Returns labels and what they stand for as two columns. */
export function aligned(rows: readonly (readonly [string, string])[]): string {
  const width = Math.max(...rows.map(([label]) => label.length)) + 2
  return rows.map(([label, text]) => `${label.padEnd(width)}${text}`).join('\n')
}

const WIDTH = 100

/** Returns two columns, the second one wrapped. */
export function columns(rows: readonly (readonly [string, string])[]): string {
  const left = Math.max(...rows.map(([first]) => first.length)) + 2
  return rows
    .map(
      ([first, second]) =>
        `  ${first.padEnd(left)}${wrapped(second, WIDTH - left - 2).join(`\n${' '.repeat(left + 2)}`)}`,
    )
    .join('\n')
}

function wrapped(text: string, width: number): string[] {
  const lines: string[] = []
  let line = ''
  for (const word of text.split(' ')) {
    if (line !== '' && line.length + 1 + word.length > width) {
      lines.push(line)
      line = word
    } else line = line === '' ? word : `${line} ${word}`
  }
  return [...lines, line]
}
