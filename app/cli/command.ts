import type { Arguments } from './arguments.ts'
import type { Io } from './io.ts'
import type { Terminal } from './terminal.ts'

/** An option as help shows it and as arguments are read by it; its key in the table is its name without the dashes. */
export type Option = {
  /** What stands for its value in help, such as FILE.csv; absent for a switch. */
  readonly value?: string
  /** It may be given more than once. */
  readonly isList?: boolean
  readonly help: string
}

export type OptionTable = Readonly<Record<string, Option>>

export type Command = {
  /** What stands after the command's name, one line for each form. */
  readonly usage: readonly string[]
  readonly options: OptionTable
  /** What help says below the options, paragraph by paragraph. */
  details(): readonly string[]
  /** What may stand after the command's name. */
  readonly examples: readonly string[]
  /** Does the work and returns the exit code. Throws UsageError, and AppError as services do. */
  run(args: Arguments, terminal: Terminal, io: Io): Promise<number>
}

/** What a command leaves to its caller. */
export const ExitCode = { Done: 0, No: 1, BadInput: 2, Internal: 70, Interrupted: 130 } as const
