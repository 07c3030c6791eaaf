import { mkdirSync, writeFileSync } from 'node:fs'
import { resolve } from 'node:path'
import { parseArgs } from 'node:util'
import { Worker } from 'node:worker_threads'
import { caseText } from './fuzz-case.ts'
import type { FuzzMessage, FuzzWork } from './fuzz-worker.ts'
import { FUZZED_READERS, type FuzzedReader } from './fuzzed-readers.ts'

/** A case may take this long; one that seems to take longer is tried again alone before it counts as a hang. */
const LIMIT_MS = 1000
const RETRIES = 2

const HELP = `npm run fuzz -- [--count N] [--seed N] [--reader NAME] [--case N]
Reads N mutated inputs with each reader (100000): none may crash, hang over 1 s, or give a diagnostic without a place.
Inputs that fail are written to out/fuzz. --case reads one case again.`

const { values } = parseArgs({
  options: {
    count: { type: 'string', default: '100000' },
    seed: { type: 'string', default: '1' },
    reader: { type: 'string' },
    case: { type: 'string' },
    help: { type: 'boolean', default: false },
  },
})

/** Problems of one reader that are printed and kept; more are counted. */
const SHOWN = 5

const folder = resolve(import.meta.dirname, '../../out/fuzz')

type Outcome = { problems: number; hangs: number; slowestMs: number; slowest: number }

/** Runs cases first … end − 1 in a worker that is ended when one case takes too long; returns where it stopped. */
function runBatch(
  reader: FuzzedReader,
  seed: number,
  first: number,
  end: number,
  outcome: Outcome,
): Promise<{ readonly hungAt: number | null }> {
  const at = new SharedArrayBuffer(4)
  const work: FuzzWork = { reader: reader.name, seed, first, end, at }
  const counter = new Int32Array(at)
  counter[0] = -1
  const worker = new Worker(new URL('./fuzz-worker.ts', import.meta.url), { workerData: work })
  return new Promise((settle, fail) => {
    let seen = -1
    let since = performance.now()
    const watch = setInterval(() => {
      const now = Atomics.load(counter, 0)
      if (now !== seen) {
        seen = now
        since = performance.now()
      } else if (seen >= 0 && performance.now() - since > LIMIT_MS) {
        clearInterval(watch)
        void worker.terminate().then(() => settle({ hungAt: seen }))
      }
    }, 50)
    worker.on('message', (message: FuzzMessage) => {
      if (message.kind === 'problem') {
        if (++outcome.problems <= SHOWN) keep(reader, seed, message.number, message.problem)
      } else if (message.slowestMs > outcome.slowestMs) {
        outcome.slowestMs = message.slowestMs
        outcome.slowest = message.slowest
      }
    })
    worker.on('error', (reason) => {
      clearInterval(watch)
      fail(reason)
    })
    worker.on('exit', (code) => {
      clearInterval(watch)
      if (code === 0) settle({ hungAt: null })
    })
  })
}

function keep(reader: FuzzedReader, seed: number, number: number, problem: string): void {
  mkdirSync(folder, { recursive: true })
  const name = `${reader.name.replaceAll(' ', '-')}-${seed}-${number}.txt`
  writeFileSync(resolve(folder, name), caseText(reader, seed, number))
  console.log(`  ${reader.name}, case ${number}: ${problem.split('\n').slice(0, 4).join('\n  ')}`)
}

async function fuzz(reader: FuzzedReader, seed: number, first: number, end: number): Promise<Outcome> {
  const outcome: Outcome = { problems: 0, hangs: 0, slowestMs: 0, slowest: first }
  let next = first
  while (next < end) {
    const { hungAt } = await runBatch(reader, seed, next, end, outcome)
    if (hungAt === null) break
    let hangs = true
    for (let retry = 0; retry < RETRIES && hangs; retry++) {
      hangs = (await runBatch(reader, seed, hungAt, hungAt + 1, outcome)).hungAt !== null
    }
    if (hangs) {
      outcome.hangs++
      keep(reader, seed, hungAt, `takes more than ${LIMIT_MS} ms`)
    }
    next = hungAt + 1
  }
  return outcome
}

if (values.help) {
  console.log(HELP)
} else {
  const seed = Number(values.seed)
  const only = values.case === undefined ? null : Number(values.case)
  const readers = FUZZED_READERS.filter(({ name }) => values.reader === undefined || values.reader === name)
  if (readers.length === 0) {
    console.error(`no such reader; there are: ${FUZZED_READERS.map(({ name }) => name).join(', ')}`)
    process.exitCode = 2
  }
  for (const reader of readers) {
    const started = performance.now()
    const first = only ?? 0
    const end = only === null ? Number(values.count) : only + 1
    const { problems, hangs, slowestMs, slowest } = await fuzz(reader, seed, first, end)
    if (problems + hangs > 0) process.exitCode = 1
    const seconds = ((performance.now() - started) / 1000).toFixed(0)
    console.log(
      `${reader.name.padEnd(20)} ${end - first} inputs, ${problems} problems, ${hangs} hangs, slowest ${slowestMs.toFixed(0)} ms (case ${slowest}), ${seconds} s`,
    )
  }
}
