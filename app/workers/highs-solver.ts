import { dirname, extname, join } from 'node:path'
import { pathToFileURL } from 'node:url'
import { MessageChannel, receiveMessageOnPort, Worker } from 'node:worker_threads'
import type { MipModel, MipResult, MipSolver } from '../engine/choose/mip.ts'
import { type SolveAnswer, SolveBest, SolveControl, type SolveRequest } from './highs-protocol.ts'

/** How long the waiting thread sleeps between two questions whether to go on. */
const ASK_EVERY_MS = 50

/** A solver that is told to stop has so long to do it by itself; then its thread is ended. */
const GRACE_MS = 60

/**
 * Returns HiGHS as the solver that the engine asks for. It runs on a thread of its own, since it may not come up for air
 * for seconds; the calling thread waits, asks `goOn` every 50 ms, and does not wait for a solver that will not stop: then
 * the best solution and bound that it told of count. `script` names the thread's script where it is not beside this file.
 */
export function createHighsSolver(script: URL = new URL('./highs-worker.ts', import.meta.url)): MipSolver {
  let worker: Worker | null = null
  return (model: MipModel, goOn: () => boolean, start?: Float64Array): MipResult => {
    worker ??= new Worker(script, { name: 'solver' })
    worker.unref()
    const control = new Int32Array(new SharedArrayBuffer(4 * SolveControl.words))
    const best = new Float64Array(new SharedArrayBuffer(8 * (SolveBest.Values + model.cost.length)))
    best[SolveBest.Bound] = model.goal === 'most' ? Infinity : -Infinity
    const { port1, port2 } = new MessageChannel()
    const request: SolveRequest = { model, start: start ?? null, control, best, answer: port2 }
    worker.postMessage(request, [port2])
    while (Atomics.wait(control, SolveControl.Done, 0, ASK_EVERY_MS) === 'timed-out') {
      if (goOn()) continue
      Atomics.store(control, SolveControl.Stop, 1)
      if (Atomics.wait(control, SolveControl.Done, 0, GRACE_MS) !== 'timed-out') break
      void worker.terminate()
      worker = null
      port1.close()
      return bestSoFar(model, best)
    }
    const answer = (receiveMessageOnPort(port1) as { message: SolveAnswer } | undefined)?.message
    port1.close()
    if (answer?.kind === 'done') return answer.result
    throw new Error(`the solver failed: ${answer?.message ?? 'it gave no answer'}`)
  }
}

/** Returns the solver whose thread's script lies beside another thread's, in sources and bundles alike. */
export function highsBeside(script: string): MipSolver {
  return createHighsSolver(pathToFileURL(join(dirname(script), `highs-worker${extname(script)}`)))
}

function bestSoFar({ goal }: MipModel, best: Float64Array): MipResult {
  const hasValues = best[SolveBest.HasValues] === 1
  return {
    state: 'stopped',
    values: hasValues ? best.slice(SolveBest.Values) : null,
    objective: hasValues ? (best[SolveBest.Objective] ?? NaN) : goal === 'most' ? -Infinity : Infinity,
    bound: best[SolveBest.Bound] ?? NaN,
  }
}
