import { parentPort, workerData } from 'node:worker_threads'
import { caseText, problemOf } from './fuzz-case.ts'
import { FUZZED_READERS } from './fuzzed-readers.ts'

/** What the worker is given; it writes the number of the case that it is at into `at`. */
export type FuzzWork = {
  readonly reader: string
  readonly seed: number
  readonly first: number
  readonly end: number
  readonly at: SharedArrayBuffer
}

export type FuzzMessage =
  | { readonly kind: 'problem'; readonly number: number; readonly problem: string }
  | { readonly kind: 'done'; readonly slowestMs: number; readonly slowest: number }

const { reader: name, seed, first, end, at: shared } = workerData as FuzzWork
const reader = FUZZED_READERS.find((candidate) => candidate.name === name)
if (reader === undefined) throw new Error(`no reader ${name}`)
const at = new Int32Array(shared)
let slowestMs = 0
let slowest = first
for (let number = first; number < end; number++) {
  Atomics.store(at, 0, number)
  const text = caseText(reader, seed, number)
  const start = performance.now()
  const problem = problemOf(reader, text)
  const ms = performance.now() - start
  if (ms > slowestMs) {
    slowestMs = ms
    slowest = number
  }
  if (problem !== null) parentPort?.postMessage({ kind: 'problem', number, problem } satisfies FuzzMessage)
}
parentPort?.postMessage({ kind: 'done', slowestMs, slowest } satisfies FuzzMessage)
