import { readFileSync } from 'node:fs'
import { availableParallelism } from 'node:os'
import { AppError } from '../../contract/errors.ts'
import type { SimulationResult, SimulationTask } from '../../engine/simulate/simulation.ts'
import { createSimulationPool } from '../../workers/simulation-pool.ts'
import type { FileWork } from './file-work.ts'

export type Simulator = {
  /** Throws AppError 'cancelled' once the work is. */
  run(
    task: SimulationTask,
    work: FileWork,
  ): Promise<{ readonly result: SimulationResult; readonly kernelSeconds: number }>
  /** Stops the threads, without waiting for them. */
  close(): void
}

export type SimulatorParts = {
  /** The built kernel. */
  readonly kernel: string
  readonly threadScript: URL
  /** All processors where not said. */
  readonly threads: number | null
}

/** Starts simulation threads; they boot while the caller reads. */
export function startSimulator({ kernel, threadScript, threads }: SimulatorParts): Simulator {
  const pool = createSimulationPool({
    threads: threads ?? availableParallelism(),
    wasmBytes: readFileSync(kernel),
    workerUrl: threadScript,
  })
  return {
    async run(task, work) {
      const outcome = await pool.run(task, {
        signal: work.signal,
        onProgress: ({ phase, done, total }) =>
          work.report({
            phase: phase === 'packing' ? 'Preparing' : 'Simulating',
            share: done / total,
          }),
      })
      if (outcome.state === 'cancelled') throw new AppError('cancelled')
      return outcome
    },
    close: () => void pool.close(),
  }
}
