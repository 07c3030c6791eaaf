import { MessageChannel, Worker, type MessagePort } from 'node:worker_threads'
import type { BlockReport } from '../engine/simulate/block-report.ts'
import type { DetectionProfile } from '../engine/simulate/detection-profile.ts'
import { kernelTaskOf, type KernelTask } from '../engine/simulate/kernel-task.ts'
import type { BitPlane } from '../engine/simulate/pattern-set.ts'
import type { SimulationResult, SimulationTask } from '../engine/simulate/simulation.ts'
import {
  Control,
  type RunReport,
  type RunRequest,
  type SimulateWorkerData,
  type SimulationCheckpoint,
} from './simulate-protocol.ts'

export type { SimulationCheckpoint } from './simulate-protocol.ts'

export type SimulationProgress = {
  readonly phase: 'packing' | 'simulating'
  /** Patterns, of all that the set has. */
  readonly done: number
  readonly total: number
  /** Uncollapsed faults × patterns a second, since the run began or was resumed. */
  readonly pairsPerSecond: number
}

export type SimulationOptions = {
  /** At most as many as the pool has; all of them where not said. */
  readonly threads?: number
  readonly signal?: AbortSignal
  readonly onProgress?: (progress: SimulationProgress) => void
  readonly resumeFrom?: SimulationCheckpoint
  readonly onCheckpoint?: (checkpoint: SimulationCheckpoint) => void
  /** Takes what each block detects, blocks in any order; needs detectionLimit 0. The threads wait while it is behind. */
  readonly onBlock?: (block: BlockReport) => void
  /** Detections in a block at which a class is easy, so that its count alone is reported. */
  readonly easyFrom?: number
}

export type SimulationOutcome =
  | {
      readonly state: 'done'
      readonly result: SimulationResult
      readonly kernelSeconds: number
      /** What the kernel's memory took. */
      readonly memoryBytes: number
    }
  | { readonly state: 'cancelled'; readonly checkpoint: SimulationCheckpoint }

/** Threads that simulate one task after the other, in the order in which they were asked for. */
export type SimulationPool = {
  readonly threads: number
  run(task: SimulationTask, options?: SimulationOptions): Promise<SimulationOutcome>
  /** Stops the threads; a run under way is rejected. */
  close(): Promise<void>
}

export type SimulationPoolConfig = {
  readonly threads: number
  /** The built kernel. */
  readonly wasmBytes: Uint8Array
  /** The script of the threads, where it is not beside this file. */
  readonly workerUrl?: URL
}

const PROGRESS_MILLISECONDS = 100
/** A quarter of a block: up to here a list of patterns would not take much less than their bits. */
const EASY_FROM = 128

/** Starts the threads at once, so that they are ready when the first task has been read. */
export function createSimulationPool(config: SimulationPoolConfig): SimulationPool {
  const threads = Math.max(1, Math.floor(config.threads))
  let crew: Crew | null = startCrew(threads, config)
  let last: Promise<unknown> = Promise.resolve()
  let runs = 0
  const close = async (): Promise<void> => {
    const leaving = crew
    crew = null
    await leaving?.stop()
  }
  const run = async (task: SimulationTask, options: SimulationOptions): Promise<SimulationOutcome> => {
    crew ??= startCrew(threads, config)
    try {
      return await runOn(crew, ++runs, task, {
        ...options,
        threads: Math.min(threads, options.threads ?? threads),
      })
    } catch (error) {
      await close()
      throw error
    }
  }
  return {
    threads,
    run(task, options = {}) {
      const outcome = last.then(() => run(task, options))
      last = outcome.catch(() => undefined)
      return outcome
    },
    close,
  }
}

type Crew = {
  readonly coordinator: Worker
  /** The coordinator and its helpers. */
  readonly workers: readonly Worker[]
  /** Set where a thread has failed: the error that stopped it. */
  failure: Error | null
  /** Called when a thread fails or all have been stopped. */
  onFailure: (error: Error) => void
  readonly stop: () => Promise<void>
}

function startCrew(threads: number, { wasmBytes, workerUrl }: SimulationPoolConfig): Crew {
  const script = workerUrl ?? new URL('./simulate-worker.ts', import.meta.url)
  const fail = (error: Error): void => {
    crew.failure ??= error
    crew.onFailure(crew.failure)
  }
  const start = (data: SimulateWorkerData, ports: readonly MessagePort[]): Worker => {
    const worker = new Worker(script, {
      workerData: data,
      transferList: [...ports],
      name: `simulate ${data.role}`,
    })
    worker.on('error', (error) => fail(error instanceof Error ? error : new Error(String(error))))
    worker.on('exit', () => fail(new Error('the simulation threads have stopped')))
    worker.unref()
    return worker
  }
  const channels = Array.from({ length: threads - 1 }, () => new MessageChannel())
  const ports = channels.map((channel) => channel.port1)
  const coordinator = start({ role: 'coordinator', wasmBytes, helpers: ports }, ports)
  const helpers = channels.map(({ port2 }) =>
    start({ role: 'helper', wasmBytes, coordinator: port2 }, [port2]),
  )
  const workers = [coordinator, ...helpers]
  const crew: Crew = {
    coordinator,
    workers,
    failure: null,
    onFailure: () => undefined,
    async stop() {
      await Promise.all(workers.map((worker) => worker.terminate()))
    },
  }
  return crew
}

function runOn(
  crew: Crew,
  run: number,
  task: SimulationTask,
  options: SimulationOptions & { readonly threads: number },
): Promise<SimulationOutcome> {
  const { coordinator } = crew
  const { signal, onProgress, onCheckpoint, onBlock } = options
  const easyFrom = onBlock === undefined ? null : (options.easyFrom ?? EASY_FROM)
  const control = new SharedArrayBuffer(4 * Control.words)
  const words = new Int32Array(control)
  const started = performance.now()
  const total = task.patterns.nPatterns
  const resumeFrom = options.resumeFrom ?? null
  const report = (): void => onProgress?.(progressOf(words, task, resumeFrom, started))

  return new Promise((resolve, reject) => {
    const cancel = (): void => {
      Atomics.store(words, Control.Cancel, 1)
      // Packing a large circuit takes a while and can't be interrupted; nobody has to wait for its end.
      if (Atomics.load(words, Control.Units) > 0) return
      const checkpoint = resumeFrom ?? { patternsDone: 0, profile: emptyProfile(task) }
      settle(() => resolve({ state: 'cancelled', checkpoint }))
    }
    const settle = (end: () => void): void => {
      clearInterval(timer)
      signal?.removeEventListener('abort', cancel)
      for (const worker of crew.workers) worker.off('message', onMessage)
      crew.onFailure = () => undefined
      coordinator.unref()
      end()
    }
    const onMessage = (message: RunReport): void => {
      if (message.run !== run) return
      switch (message.kind) {
        case 'block':
          onBlock?.(message.block)
          Atomics.sub(words, Control.Reports, 1)
          Atomics.notify(words, Control.Reports)
          return
        case 'checkpoint':
          onCheckpoint?.(message.checkpoint)
          return
        case 'cancelled':
          return settle(() => resolve({ state: 'cancelled', checkpoint: message.checkpoint }))
        case 'failed':
          return settle(() => reject(new Error(message.message)))
        case 'done': {
          const { profile, matrix, kernelSeconds, memoryBytes } = message
          onProgress?.({ ...progressOf(words, task, resumeFrom, started), done: total })
          settle(() => resolve({ state: 'done', result: { profile, matrix }, kernelSeconds, memoryBytes }))
        }
      }
    }
    const timer = setInterval(report, PROGRESS_MILLISECONDS)
    if (signal?.aborted) return cancel()
    signal?.addEventListener('abort', cancel)
    crew.onFailure = (error) => settle(() => reject(error))
    if (crew.failure !== null) return crew.onFailure(crew.failure)
    for (const worker of crew.workers) worker.on('message', onMessage)
    coordinator.ref()
    coordinator.postMessage({
      run,
      task: shareable(kernelTaskOf(task, easyFrom)),
      threads: options.threads,
      resumeFrom,
      wantCheckpoints: onCheckpoint !== undefined,
      control,
    } satisfies RunRequest)
  })
}

function emptyProfile({
  faults: { nClasses },
  patterns: { nPatterns },
  detectionLimit,
}: SimulationTask): DetectionProfile {
  const first = new Int32Array(nClasses).fill(-1)
  const detections = new Uint32Array(nClasses)
  return { nClasses, nPatterns, detectionLimit, first, detections, possibly: new Uint8Array(nClasses) }
}

function progressOf(
  control: Int32Array,
  task: SimulationTask,
  resumeFrom: SimulationCheckpoint | null,
  started: number,
): SimulationProgress {
  const total = task.patterns.nPatterns
  const units = Atomics.load(control, Control.Units)
  const before = resumeFrom?.patternsDone ?? 0
  const fresh = units === 0 ? 0 : (Atomics.load(control, Control.UnitsDone) / units) * (total - before)
  const seconds = (performance.now() - started) / 1000
  return {
    phase: units === 0 ? 'packing' : 'simulating',
    done: Math.round(before + fresh),
    total,
    pairsPerSecond: seconds > 0 ? (fresh * task.faults.nFaults) / seconds : 0,
  }
}

/** Puts pattern words where all threads can read them, so that they are copied once and not once a thread. */
function shareable(task: KernelTask): KernelTask {
  const { patterns } = task
  return {
    ...task,
    patterns: {
      ...patterns,
      value: sharedPlane(patterns.value),
      unknown: patterns.unknown && sharedPlane(patterns.unknown),
      observed: patterns.observed && sharedPlane(patterns.observed),
    },
  }
}

function sharedPlane(plane: BitPlane): BitPlane {
  if (plane.words.buffer instanceof SharedArrayBuffer) return plane
  const words = new Uint32Array(new SharedArrayBuffer(plane.words.byteLength))
  words.set(plane.words)
  return { ...plane, words }
}
