import { findInstallation } from '../installation.ts'
import { startSimulator, type Simulator } from '../services/on-files/simulator.ts'
import type { Arguments } from './arguments.ts'
import type { Io } from './io.ts'

/** Starts the threads that were asked for. */
export function simulatorOf(args: Arguments, { entryUrl }: Io): Simulator {
  const threads = args.number('threads', {
    least: 1,
    most: 256,
    whole: true,
    what: 'a whole number from 1 to 256',
  })
  const installation = findInstallation(entryUrl)
  return startSimulator({
    kernel: installation.kernel,
    threadScript: installation.thread('simulate-worker'),
    threads,
  })
}
