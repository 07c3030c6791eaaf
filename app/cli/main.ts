import type { Io } from './io.ts'

/** Runs one command of the command line; returns the exit code. */
export async function main(argv: readonly string[], io: Io): Promise<number> {
  const [command, ...args] = argv
  if (command === 'serve') return (await import('./serve.ts')).serve(args, io)
  io.stderr.write('unknown command\n')
  return 2
}
