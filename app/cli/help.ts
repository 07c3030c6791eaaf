import type { Command, OptionTable } from './command.ts'
import { COMMANDS } from './commands.ts'
import { columns } from './print-text.ts'

const PROGRAM = 'tallycut'

/** Returns the list of commands. */
export function overview(): string {
  const rows = Object.entries(COMMANDS).map(([name, { summary }]) => [name, summary] as const)
  return `Tallycut plans how many structural test patterns to run, which, and in what order.

Usage: ${PROGRAM} COMMAND …      ${PROGRAM} help COMMAND tells all options of one

${columns(rows)}

--json prints one JSON object on standard output and nothing else there. Files may be gzip-compressed;
"-" is standard input. Exit codes: 0 done; 1 the answer is no; 2 bad input or usage, with the reason on
standard error; 130 interrupted; 70 a fault in Tallycut itself.
`
}

/** Returns all that there is to say of one command. */
export function commandHelp(name: string, { usage, options, details, examples }: Command): string {
  const parts = [
    usage.map((line, at) => `${at === 0 ? 'Usage:' : '      '} ${PROGRAM} ${name} ${line}`).join('\n'),
    COMMANDS[name]?.summary.replace(/^./, (letter) => letter.toUpperCase()) + '.',
    columns(optionRows(options)),
    ...details(),
    `Examples:\n${examples.map((line) => `  ${PROGRAM} ${name} ${line}`).join('\n')}`,
  ]
  return `${parts.join('\n\n')}\n`
}

function optionRows(options: OptionTable): (readonly [string, string])[] {
  return Object.entries(options).map(([name, { value, help }]) => [
    `--${name}${value === undefined ? '' : ` ${value}`}`,
    help,
  ])
}
