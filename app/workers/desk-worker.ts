import { parentPort, workerData } from 'node:worker_threads'
import { AppError } from '../contract/errors.ts'
import type { DeskAnswer } from './desk-answer.ts'
import type { DeskContext, DeskProgress, DeskThreads } from './desk-context.ts'
import type { DeskJobName, DeskJobs, FromDesk, ToDesk } from './desk-protocol.ts'

type Work = {
  readonly [N in DeskJobName]: () => Promise<
    (
      input: DeskJobs[N]['input'],
      context: DeskContext<DeskJobs[N]['part']>,
    ) => DeskAnswer<DeskJobs[N]['output']> | Promise<DeskAnswer<DeskJobs[N]['output']>>
  >
}

/** Each job's code is loaded when it is first asked for. */
const WORK: Work = {
  'read-netlist': async () => (await import('./read-netlist-job.ts')).readNetlistJob,
  'read-patterns': async () => (await import('./read-patterns-job.ts')).readPatternsJob,
  compress: async () => (await import('./compress-job.ts')).compressJob,
  simulate: async () => (await import('./simulate-job.ts')).simulateJob,
  'hold-run': async () => (await import('./hold-run-job.ts')).holdRunJob,
  view: async () => (await import('./view-job.ts')).viewJob,
  figures: async () => (await import('./view-job.ts')).figuresJob,
  money: async () => (await import('./money-job.ts')).moneyJob,
  'lost-faults': async () => (await import('./lost-faults-job.ts')).lostFaultsJob,
  'make-export': async () => (await import('./export-job.ts')).exportJob,
  'prove-ceiling': async () => (await import('./ceiling-job.ts')).ceilingJob,
  'price-constraints': async () => (await import('./constraint-costs-job.ts')).constraintCostsJob,
  'improve-choice': async () => (await import('./improve-job.ts')).improveJob,
  'find-smallest': async () => (await import('./smallest-job.ts')).smallestJob,
}

const PROGRESS_EVERY_MS = 100

const owner = parentPort
if (owner === null) throw new Error('a desk runs on a worker thread only')
const threads = workerData as DeskThreads
const controllers = new Map<number, AbortController>()
let last: Promise<void> = Promise.resolve()

owner.on('message', (message: ToDesk) => {
  if (message.type === 'cancel') {
    controllers.get(message.jobId)?.abort()
    return
  }
  controllers.set(message.jobId, new AbortController())
  last = last.then(() => perform(message))
})

async function perform({ jobId, name, input, cancel }: Extract<ToDesk, { type: 'run' }>): Promise<void> {
  const post = (message: FromDesk, buffers: readonly ArrayBuffer[] = []): void =>
    owner?.postMessage(message, [...buffers])
  const flag = new Int32Array(cancel)
  const controller = controllers.get(jobId) ?? new AbortController()
  let toldAt = -Infinity
  const context: DeskContext<never> = {
    threads,
    signal: controller.signal,
    isCancelled: () => Atomics.load(flag, 0) !== 0,
    report(progress: DeskProgress) {
      const now = performance.now()
      if (now - toldAt < PROGRESS_EVERY_MS) return
      toldAt = now
      post({ type: 'progress', jobId, progress })
    },
    send: (part, buffers) => post({ type: 'part', jobId, part }, buffers),
  }
  try {
    if (context.isCancelled()) return post({ type: 'cancelled', jobId })
    const work = (await WORK[name]()) as (input: unknown, context: DeskContext<never>) => unknown
    const answer = (await work(input, context)) as DeskAnswer<unknown>
    if (context.isCancelled()) return post({ type: 'cancelled', jobId })
    post({ type: 'done', jobId, output: answer.output }, answer.buffers)
  } catch (error) {
    if (context.isCancelled()) return post({ type: 'cancelled', jobId })
    if (error instanceof AppError) {
      const { code, message, details } = error
      return post({ type: 'failed', jobId, code, message, details })
    }
    const message = error instanceof Error ? (error.stack ?? error.message) : String(error)
    post({ type: 'failed', jobId, code: null, message })
  } finally {
    controllers.delete(jobId)
  }
}
