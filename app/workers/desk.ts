import { Worker } from 'node:worker_threads'
import { AppError } from '../contract/errors.ts'
import type { DeskProgress, DeskThreads } from './desk-context.ts'
import type { DeskJobName, DeskJobs, FromDesk, ToDesk } from './desk-protocol.ts'

export type DeskOptions<N extends DeskJobName> = {
  readonly signal?: AbortSignal
  readonly onProgress?: (progress: DeskProgress) => void
  readonly onPart?: (part: DeskJobs[N]['part']) => void
  /** Buffers that go over to the desk and are not used here again. */
  readonly transfer?: readonly ArrayBuffer[]
}

/** A thread that does one job after the other, so that whoever asks stays free to answer. */
export type Desk = {
  /** Rejects with AppError 'cancelled', with 'worker-lost' where the thread ended, or with the job's own error. */
  run<N extends DeskJobName>(
    name: N,
    input: DeskJobs[N]['input'],
    options?: DeskOptions<N>,
  ): Promise<DeskJobs[N]['output']>
  close(): Promise<void>
}

type Waiting = {
  readonly options: DeskOptions<DeskJobName>
  resolve(output: never): void
  reject(error: Error): void
}

/** Whoever cancels is answered after so long, even while the desk is still busy putting things down. */
const ANSWER_MS = 100
/** A job that does not stop by itself so long after it was asked to is stopped together with its thread. */
const GRACE_MS = 2000

/** Returns a desk; its thread starts with the first job and again after one that it did not survive. */
export function createDesk(script: URL, name: string, threads: DeskThreads): Desk {
  let worker: Worker | null = null
  let jobs = 0
  /** Jobs whose outcome somebody waits for, and jobs that the thread has not reported the end of. */
  const waiting = new Map<number, Waiting>()
  const busy = new Set<number>()

  const settle = (jobId: number, end: (job: Waiting) => void): void => {
    const job = waiting.get(jobId)
    waiting.delete(jobId)
    if (job !== undefined) end(job)
  }

  const hear = (message: FromDesk): void => {
    const { jobId } = message
    if (message.type !== 'progress' && message.type !== 'part') {
      busy.delete(jobId)
      if (busy.size === 0) worker?.unref()
    }
    switch (message.type) {
      case 'progress':
        return waiting.get(jobId)?.options.onProgress?.(message.progress)
      case 'part':
        return waiting.get(jobId)?.options.onPart?.(message.part as never)
      case 'done':
        return settle(jobId, (job) => job.resolve(message.output as never))
      case 'cancelled':
        return settle(jobId, (job) => job.reject(new AppError('cancelled')))
      case 'failed':
        return settle(jobId, (job) =>
          job.reject(
            message.code === null
              ? new Error(message.message)
              : new AppError(message.code, message.message, message.details),
          ),
        )
    }
  }

  const start = (): Worker => {
    const started = new Worker(script, { workerData: threads, name })
    const lose = (cause: unknown): void => {
      if (worker !== started) return
      worker = null
      busy.clear()
      for (const jobId of [...waiting.keys()]) {
        settle(jobId, (job) => job.reject(new AppError('worker-lost', undefined, undefined, cause)))
      }
    }
    started.on('message', hear)
    started.on('error', lose)
    started.on('exit', () => lose(undefined))
    return started
  }

  return {
    run(name, input, options = {}) {
      const { signal, transfer = [] } = options
      if (signal?.aborted) return Promise.reject(new AppError('cancelled'))
      const jobId = ++jobs
      worker ??= start()
      const onto = worker
      onto.ref()
      const cancel = new SharedArrayBuffer(4)
      const stop = (): void => {
        Atomics.store(new Int32Array(cancel), 0, 1)
        onto.postMessage({ type: 'cancel', jobId } satisfies ToDesk)
        const giveUp = (): void => settle(jobId, (job) => job.reject(new AppError('cancelled')))
        // Jobs are done in their order: the oldest that has not ended is the one at work.
        const endThread = (): void => {
          if (Math.min(...busy) === jobId) void onto.terminate()
        }
        setTimeout(giveUp, ANSWER_MS).unref()
        setTimeout(endThread, GRACE_MS).unref()
      }
      signal?.addEventListener('abort', stop, { once: true })
      const outcome = new Promise<DeskJobs[typeof name]['output']>((resolve, reject) => {
        waiting.set(jobId, { options: options as DeskOptions<DeskJobName>, resolve, reject })
      })
      busy.add(jobId)
      onto.postMessage({ type: 'run', jobId, name, input, cancel } satisfies ToDesk, [...transfer])
      return outcome.finally(() => signal?.removeEventListener('abort', stop))
    },
    async close() {
      const leaving = worker
      worker = null
      for (const jobId of [...waiting.keys()]) settle(jobId, (job) => job.reject(new AppError('cancelled')))
      await leaving?.terminate()
    },
  }
}
