import type { Io } from './io.ts'

type Command = (args: readonly string[], io: Io) => Promise<number>

/** Every command, loaded when it is asked for. */
const COMMANDS: Readonly<Record<string, () => Promise<Command>>> = {
  circuit: async () => inProgress('circuit'),
  coverage: async () => inProgress('coverage'),
  plan: async () => inProgress('plan'),
  compare: async () => inProgress('compare'),
  serve: async () => (await import('./serve.ts')).serve,
}

/** Runs one command of the command line; returns the exit code. */
export async function main(argv: readonly string[], io: Io): Promise<number> {
  const [name = 'help', ...args] = argv
  if (!Object.hasOwn(COMMANDS, name)) {
    io.stderr.write(`There is no command "${name}". There are: ${Object.keys(COMMANDS).join(', ')}.\n`)
    return 2
  }
  const command = await COMMANDS[name]?.()
  return command === undefined ? 70 : command(args, io)
}

function inProgress(name: string): Command {
  return async (_args, io) => {
    io.stderr.write(`The command "${name}" is being written.\n`)
    return 70
  }
}
