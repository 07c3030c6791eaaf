import type { MessagePort } from 'node:worker_threads'
import type { MipModel, MipResult } from '../engine/choose/mip.ts'

/** What the solver's thread is asked. */
export type SolveRequest = {
  readonly model: MipModel
  readonly start: Float64Array | null
  readonly control: Int32Array
  readonly best: Float64Array
  readonly answer: MessagePort
}

export type SolveAnswer =
  | { readonly kind: 'done'; readonly result: MipResult }
  | { readonly kind: 'failed'; readonly message: string }

/** Words of `control`, shared by both threads. */
export const SolveControl = { Done: 0, Stop: 1, words: 2 } as const

/** Places of `best`, shared by both threads: what is known so far, then the values of the variables. */
export const SolveBest = { HasValues: 0, Objective: 1, Bound: 2, Values: 3 } as const
