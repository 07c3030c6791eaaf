import type { Writable } from 'node:stream'
import type { OptionTable } from './command.ts'

export const JSON_OPTION = {
  json: { help: 'print one JSON object on standard output and nothing else there' },
} as const satisfies OptionTable

export function printJson(value: object, stdout: Writable): void {
  stdout.write(`${JSON.stringify(value)}\n`)
}
