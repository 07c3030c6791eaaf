import { AppError } from '../contract/errors.ts'
import { closestName } from '../engine/source/closest-name.ts'
import { readArguments, UsageError } from './arguments.ts'
import { ExitCode } from './command.ts'
import { COMMANDS, type CommandEntry, type PlainEntry } from './commands.ts'
import type { Io } from './io.ts'
import { openTerminal, type Terminal } from './terminal.ts'

const HELP = new Set(['--help', '-h'])

/** Runs one command of the command line; returns the exit code. */
export async function main(argv: readonly string[], io: Io): Promise<number> {
  const [name, ...args] = argv
  const terminal = openTerminal(io)
  try {
    if (name === '--version') return await version(io)
    if (name === undefined || name === 'help' || HELP.has(name)) return await help(args[0] ?? null, io)
    const entry = entryOf(name)
    if (args.some((arg) => HELP.has(arg))) return await help(name, io)
    if ('loadPlain' in entry) return await (await entry.loadPlain())(args, io)
    const command = await entry.load()
    return await command.run(readArguments(args, command.options), terminal, io)
  } catch (error) {
    return exitCodeOf(error, name ?? 'help', terminal)
  } finally {
    terminal.clear()
  }
}

function entryOf(name: string): CommandEntry | PlainEntry {
  const entry = Object.hasOwn(COMMANDS, name) ? COMMANDS[name] : undefined
  if (entry !== undefined) return entry
  const names = Object.keys(COMMANDS)
  const close = closestName(name, names)
  throw new UsageError(
    `There is no command "${name}".`,
    close === null ? `Commands: ${names.join(', ')}.` : `Did you mean "${close}"?`,
  )
}

async function help(name: string | null, io: Io): Promise<number> {
  const { commandHelp, overview } = await import('./help.ts')
  const entry = name === null || HELP.has(name) ? null : entryOf(name)
  const isListed = name !== null && entry !== null && 'load' in entry
  io.stdout.write(isListed ? commandHelp(name, await entry.load()) : overview())
  return ExitCode.Done
}

async function version({ entryUrl, stdout }: Io): Promise<number> {
  const { findInstallation, versionOf } = await import('../installation.ts')
  stdout.write(`Tallycut ${versionOf(findInstallation(entryUrl))}\n`)
  return ExitCode.Done
}

/** Says what went wrong, unless it was said when it was found. */
function exitCodeOf(error: unknown, name: string, terminal: Terminal): number {
  if (error instanceof UsageError) {
    terminal.fail(error.message, error.hint ?? `"tallycut help ${name}" tells all options.`)
    return ExitCode.BadInput
  }
  const fileProblem = fileProblemOf(error)
  if (fileProblem !== null) {
    terminal.fail(fileProblem)
    return ExitCode.BadInput
  }
  if (!(error instanceof AppError) || error.code === 'internal') {
    const trace = error instanceof Error ? (error.stack ?? error.message) : String(error)
    terminal.fail('A fault in Tallycut itself.', `Please report it with the lines that follow.\n${trace}`)
    return ExitCode.Internal
  }
  if (error.code === 'cancelled') {
    terminal.say('Interrupted.')
    return ExitCode.Interrupted
  }
  if (error.code !== 'bad-file') terminal.fail(error.message)
  return error.code === 'out-of-reach' ? ExitCode.No : ExitCode.BadInput
}

const FILE_PROBLEMS: Readonly<Record<string, string>> = {
  ENOSPC: 'there is no room left on the disk',
  EACCES: 'there is no permission to write there',
  EPERM: 'there is no permission to write there',
  EROFS: 'the disk is for reading only',
  ENOENT: 'there is no such folder',
}

/** What keeps a file from being written, or null where the error is another. */
function fileProblemOf(error: unknown): string | null {
  const { code, path } = error as NodeJS.ErrnoException
  const words = code === undefined ? undefined : FILE_PROBLEMS[code]
  return words === undefined ? null : `${path ?? 'A file'} could not be written: ${words}.`
}
