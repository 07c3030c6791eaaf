import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { dirname, join } from 'node:path'
import { pathToFileURL } from 'node:url'
import { Readable, Writable } from 'node:stream'
import { afterAll } from 'vitest'
import { main } from '../../app/cli/main.ts'
import { buildStale } from '../../app/launch/build.mjs'

const root = join(import.meta.dirname, '../..')

export type CliRun = { readonly code: number; readonly stdout: string; readonly stderr: string }

export type CliOptions = {
  readonly stdin?: string
  readonly isTTY?: boolean
  readonly env?: Readonly<Record<string, string>>
  readonly signal?: AbortSignal
}

let kernel: Promise<void> | null = null

/** Runs the command line in this process, with streams of its own. Builds the kernel first where it is stale. */
export async function runCli(argv: readonly string[], options: CliOptions = {}): Promise<CliRun> {
  await (kernel ??= buildStale(['kernel']))
  const { stdin = '', isTTY = false, env = {}, signal = new AbortController().signal } = options
  const stdout = new Collector(isTTY)
  const stderr = new Collector(isTTY)
  const code = await main(argv, {
    entryUrl: pathToFileURL(join(root, 'app/cli/index.ts')).href,
    stdin: Readable.from([Buffer.from(stdin)]),
    stdout,
    stderr,
    env,
    signal,
    isInterrupted: () => signal.aborted,
  })
  return { code, stdout: stdout.text, stderr: stderr.text }
}

/** The same, for what prints JSON; fails where anything else is on standard output or the code is not the one expected. */
export async function runJson(
  argv: readonly string[],
  options: CliOptions & { readonly code?: number } = {},
): Promise<Record<string, unknown>> {
  const { code, stdout, stderr } = await runCli([...argv, '--json'], options)
  if (code !== (options.code ?? 0)) throw new Error(`exit code ${code}\n${stderr}`)
  return JSON.parse(stdout) as Record<string, unknown>
}

class Collector extends Writable {
  text = ''
  readonly isTTY: boolean

  constructor(isTTY: boolean) {
    super()
    this.isTTY = isTTY
  }

  override _write(chunk: Buffer, _encoding: string, done: () => void): void {
    this.text += chunk.toString()
    done()
  }
}

/** Returns a function that puts a file into a folder which goes with the suite, and returns its path. */
export function temporaryFiles(): (name: string, text: string | Uint8Array) => string {
  const folder = mkdtempSync(join(tmpdir(), 'tallycut-cli-'))
  afterAll(() => rmSync(folder, { recursive: true }))
  return (name, text) => {
    const path = join(folder, name)
    mkdirSync(dirname(path), { recursive: true })
    writeFileSync(path, text)
    return path
  }
}
