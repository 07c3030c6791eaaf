import { setFlagsFromString } from 'node:v8'
import { isMainThread } from 'node:worker_threads'
import { runInThread, runOnThread, wantsThread } from './command-thread.ts'
import { ExitCode } from './command.ts'
import { main } from './main.ts'

/** A terminal and the launcher may both pass one Ctrl-C on: what comes so soon after the first is the same. */
const SAME_INTERRUPT_MILLISECONDS = 500

if (isMainThread) {
  // The kernel is compiled once, at its best, while files are read: runs of a few milliseconds would else be over first.
  setFlagsFromString('--no-liftoff')
  setFlagsFromString('--no-wasm-lazy-compilation')
  const interrupted = new AbortController()
  let interruptedAt: number | null = null
  process.on('SIGINT', () => {
    const now = performance.now()
    if (interruptedAt !== null && now - interruptedAt > SAME_INTERRUPT_MILLISECONDS) {
      process.exit(ExitCode.Interrupted)
    }
    interruptedAt ??= now
    interrupted.abort()
  })
  // Whoever reads the output may stop early, as `head` does.
  process.stdout.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code !== 'EPIPE') throw error
    process.exit(ExitCode.Done)
  })
  const argv = process.argv.slice(2)
  const { signal } = interrupted
  const exitCode = wantsThread(argv)
    ? await runOnThread(argv, import.meta.url, signal)
    : await main(argv, {
        entryUrl: import.meta.url,
        stdin: process.stdin,
        stdout: process.stdout,
        stderr: process.stderr,
        env: process.env,
        signal,
        isInterrupted: () => signal.aborted,
      })
  process.exitCode = exitCode
  if (exitCode === ExitCode.Interrupted) process.exit()
} else await runInThread(import.meta.url)
