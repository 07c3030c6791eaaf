import { parseArgs } from 'node:util'
import { closestName } from '../engine/source/closest-name.ts'
import type { OptionTable } from './command.ts'

/** The arguments of one command, read by its table of options. */
export type Arguments = {
  /** All of them, as they were given. */
  readonly words: readonly string[]
  readonly operands: readonly string[]
  has(name: string): boolean
  /** The value of an option, or null where it was not given. */
  text(name: string): string | null
  /** All values of an option that may be given more than once. */
  list(name: string): readonly string[]
  /** The value as a number that lies in the range; throws a UsageError where it does not. */
  number(name: string, range: NumberRange): number | null
}

export type NumberRange = {
  readonly least: number
  readonly most?: number
  readonly whole?: boolean
  /** What such a number is, as in "a coverage from 0 to 1". */
  readonly what: string
}

/** A command line that can't be followed, with what to do. */
export class UsageError extends Error {
  readonly hint: string | null

  constructor(message: string, hint: string | null = null) {
    super(message)
    this.name = 'UsageError'
    this.hint = hint
  }
}

/** Reads the arguments of a command. Throws a UsageError that names what is unknown, missing or given twice. */
export function readArguments(args: readonly string[], options: OptionTable): Arguments {
  const { tokens } = parseArgs({
    args: [...args],
    options: Object.fromEntries(
      Object.entries(options).map(([name, { value }]) => [
        name,
        { type: value === undefined ? 'boolean' : 'string' },
      ]),
    ),
    strict: false,
    allowPositionals: true,
    tokens: true,
  })
  const operands: string[] = []
  const given = new Map<string, string[]>()
  for (const token of tokens) {
    if (token.kind === 'positional') operands.push(token.value)
    if (token.kind !== 'option') continue
    const option = Object.hasOwn(options, token.name) ? options[token.name] : undefined
    if (option === undefined) throw unknownOption(token.rawName, Object.keys(options))
    if (option.value === undefined && token.value !== undefined) {
      throw new UsageError(`${token.rawName} takes no value; "${token.value}" was given.`)
    }
    if (option.value !== undefined && (token.value === undefined || isOption(token.value, options))) {
      throw new UsageError(`${token.rawName} needs a value: ${token.rawName} ${option.value}`)
    }
    const values = given.get(token.name) ?? []
    if (values.length > 0 && option.isList !== true && option.value !== undefined) {
      throw new UsageError(`${token.rawName} was given twice.`)
    }
    given.set(token.name, [...values, token.value ?? ''])
  }
  const text = (name: string): string | null => given.get(name)?.[0] ?? null
  return {
    words: args,
    operands,
    has: (name) => given.has(name),
    text,
    list: (name) => given.get(name) ?? [],
    number: (name, range) => numberOf(name, text(name), range),
  }
}

function isOption(value: string, options: OptionTable): boolean {
  return value.startsWith('--') && Object.hasOwn(options, value.slice(2))
}

function unknownOption(name: string, known: readonly string[]): UsageError {
  const close = closestName(name.replace(/^-+/, ''), known)
  const hint =
    close === null ? `Options: ${known.map((one) => `--${one}`).join(', ')}.` : `Did you mean --${close}?`
  return new UsageError(`There is no option ${name}.`, hint)
}

function numberOf(
  name: string,
  text: string | null,
  { least, most = Infinity, whole = false, what }: NumberRange,
): number | null {
  if (text === null) return null
  const value = /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(text.trim()) ? Number(text) : NaN
  if (value >= least && value <= most && (!whole || Number.isSafeInteger(value))) return value
  throw new UsageError(`--${name} takes ${what}; "${text}" was given.`)
}
