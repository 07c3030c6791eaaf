import { statSync } from 'node:fs'
import { parentPort, Worker, workerData } from 'node:worker_threads'
import { ExitCode } from './command.ts'
import { descriptorStream } from './descriptor-stream.ts'
import { main } from './main.ts'

/** Commands that compute for long without hearing an interrupt. */
const LONG_COMMANDS = new Set(['plan', 'compare'])
/** From so much input on, reading alone takes long. */
const LONG_BYTES = 32 * 1024 * 1024
/** An interrupted command that does not end by itself is ended after this long. */
const GRACE_MILLISECONDS = 1000

type ThreadData = {
  readonly argv: readonly string[]
  /** 1 once the user has interrupted. */
  readonly interrupted: Int32Array
  readonly stdoutIsTTY: boolean
  readonly stderrIsTTY: boolean
}

/** True where a command should run on a thread of its own, so that this one hears an interrupt at any time. */
export function wantsThread([command = '', ...args]: readonly string[]): boolean {
  if (LONG_COMMANDS.has(command)) return true
  const bytes = args.reduce((sum, arg) => sum + (statSync(arg, { throwIfNoEntry: false })?.size ?? 0), 0)
  return bytes >= LONG_BYTES
}

/** Runs a command on a thread of its own; returns its exit code. `script` is the entry that calls runInThread there. */
export function runOnThread(argv: readonly string[], script: string, signal: AbortSignal): Promise<number> {
  const interrupted = new Int32Array(new SharedArrayBuffer(4))
  const usesStdin = argv.includes('-')
  const data: ThreadData = {
    argv,
    interrupted,
    stdoutIsTTY: process.stdout.isTTY === true,
    stderrIsTTY: process.stderr.isTTY === true,
  }
  return new Promise((resolve) => {
    const worker = new Worker(new URL(script), { workerData: data, stdin: usesStdin, name: 'command' })
    if (usesStdin && worker.stdin !== null) process.stdin.pipe(worker.stdin)
    worker.on('message', (exitCode: number) => resolve(exitCode))
    worker.on('error', (error) => {
      process.stderr.write(
        `error: A fault in Tallycut itself: ${error instanceof Error ? error.stack : error}\n`,
      )
    })
    worker.on('exit', () => resolve(ExitCode.Internal))
    signal.addEventListener('abort', () => {
      Atomics.store(interrupted, 0, 1)
      worker.postMessage('interrupt')
      setTimeout(() => resolve(ExitCode.Interrupted), GRACE_MILLISECONDS).unref()
    })
  })
}

/** The thread's side: runs the command that it was started for. */
export async function runInThread(entryUrl: string): Promise<void> {
  const { argv, interrupted, stdoutIsTTY, stderrIsTTY } = workerData as ThreadData
  const controller = new AbortController()
  parentPort?.once('message', () => controller.abort())
  parentPort?.unref()
  const exitCode = await main(argv, {
    entryUrl,
    stdin: process.stdin,
    stdout: descriptorStream(1, stdoutIsTTY),
    stderr: descriptorStream(2, stderrIsTTY),
    env: process.env,
    signal: controller.signal,
    isInterrupted: () => Atomics.load(interrupted, 0) === 1,
  })
  parentPort?.postMessage(exitCode)
}
