import { randomUUID } from 'node:crypto'
import type { ProjectStore } from '../../db/open-project.ts'
import { AppError } from '../contract/errors.ts'
import { numberFormats, textOf } from '../contract/format-number.ts'
import type { Handlers } from '../contract/handlers.ts'
import { counted } from '../contract/plan-words.ts'
import type { Run } from '../contract/shapes/run.ts'
import type { Desk } from '../workers/desk.ts'
import type { SimulateJob } from '../workers/simulate-job.ts'
import type { EventHub } from './event-hub.ts'
import { isUnderWay } from './netlists.ts'
import { found, type Session } from './session.ts'
import { PARTS_PER_SEGMENT, storedNetlist, storedPatterns, storedSegments } from './stored-inputs.ts'
import type { QueuedTask, TaskContext, Tasks } from './tasks.ts'

const CURVES_KEPT = 4

const formats = numberFormats('en')

type Entry = { readonly store: ProjectStore; readonly runId: number; readonly task: QueuedTask }

/** Coverage runs, one at a time in the order in which they were asked for. Every second's work is kept as it is done. */
export function createRuns(options: {
  readonly session: Session
  readonly events: EventHub
  readonly tasks: Tasks
  readonly desk: Desk
  readonly engine: string
  readonly now: () => number
  readonly onFault: (where: string, error: unknown) => void
}): Pick<Handlers, 'runs.start' | 'runs.cancel' | 'runs.resume' | 'runs.delete' | 'runs.curve'> {
  const { session, events, tasks, desk, engine, now, onFault } = options
  const queue: Entry[] = []
  let current: Entry | null = null
  /** The last runs' curves so far, by id. */
  const curves = new Map<number, Float64Array>()

  const changed = ({ productId }: Run): void => events.emit('changed', { noun: 'run', productId })

  const stand = (store: ProjectStore, runId: number, changes: Partial<Run>): Run => {
    const run = found(store.runs.get(runId))
    store.runs.stand(runId, { ...run, ...changes })
    changed(run)
    return found(store.runs.get(runId))
  }

  const enqueue = (store: ProjectStore, run: Run): Run => {
    const patternSet = found(store.patternSets.get(run.patternSetId))
    const netlist = found(store.netlists.get(run.netlistId))
    const title = `Run ${run.number}: ${patternSet.name} on ${netlist.name}`
    const entry = { store, runId: run.id, task: tasks.enqueue({ kind: 'run', title, runId: run.id }) }
    queue.push(entry)
    entry.task.signal.addEventListener('abort', () => leaveQueue(entry))
    const queued = stand(store, run.id, { state: 'queued', reason: null, endedAtMs: null })
    void pump()
    return queued
  }

  const leaveQueue = (entry: Entry): void => {
    const at = queue.indexOf(entry)
    if (at < 0) return
    queue.splice(at, 1)
    entry.task.drop()
    stand(entry.store, entry.runId, { state: 'cancelled', endedAtMs: now() })
  }

  const pump = async (): Promise<void> => {
    if (current !== null) return
    for (let entry = queue.shift(); entry !== undefined; entry = queue.shift()) {
      const { store, runId, task } = entry
      current = entry
      const isOpen = (): boolean => session.current() === store
      try {
        await task.run(
          (context) => simulate(store, runId, context),
          ({ figures }) =>
            figures === null
              ? ''
              : `${formats.count(figures.detected).value} of ${counted(figures.faults, 'fault', formats)} detected`,
        )
      } catch (error) {
        if (isOpen()) endBadly(store, runId, error)
      }
      current = null
    }
  }

  const endBadly = (store: ProjectStore, runId: number, error: unknown): void => {
    if (error instanceof AppError && error.code === 'cancelled') {
      stand(store, runId, { state: 'cancelled', endedAtMs: now() })
      return
    }
    if (!(error instanceof AppError)) onFault('runs', error)
    const reason = error instanceof Error ? (error.message.split('\n', 1)[0] ?? '') : String(error)
    stand(store, runId, { state: 'failed', endedAtMs: now(), reason })
  }

  const simulate = async (store: ProjectStore, runId: number, context: TaskContext): Promise<Run> => {
    const run = stand(store, runId, { state: 'running' })
    const before = run.seconds
    const startedAt = performance.now()
    const seconds = (): number => before + (performance.now() - startedAt) / 1000
    const segments = await storedSegments(store, runId)
    store.packed.removeFrom({ runId }, 'segment', segments.length * PARTS_PER_SEGMENT)
    let soFar = soFarOf(run)
    const keep = ({ segment, part, bytes, standing }: SimulateJob['part']): void => {
      if (session.current() !== store) return
      store.together(() => {
        store.packed.add({ runId }, 'segment', segment * PARTS_PER_SEGMENT + part, bytes)
        if (standing === null) return
        store.runs.setSegments(runId, segment + 1)
        const { curve, ...changes } = standing
        curves.delete(runId)
        curves.set(runId, curve)
        for (const old of [...curves.keys()].slice(0, -CURVES_KEPT)) curves.delete(old)
        soFar = soFarOf(stand(store, runId, { ...changes, seconds: seconds() }))
      })
    }
    let lost: unknown = null
    const input = {
      ...storedNetlist(store, run.netlistId),
      patterns: storedPatterns(store, run.patternSetId),
      detectionLimit: run.detectionLimit,
      segments,
    }
    const { figures } = await desk.run('simulate', input, {
      signal: context.signal,
      onProgress: (progress) => context.report({ ...progress, soFar }),
      onPart: (part) => {
        try {
          if (lost === null) keep(part)
        } catch (error) {
          lost = error
        }
      },
    })
    if (lost !== null) throw lost
    if (session.current() !== store) throw new AppError('cancelled')
    return stand(store, runId, {
      state: 'done',
      figures,
      patternsDone: run.patternsTotal,
      seconds: seconds(),
      endedAtMs: now(),
    })
  }

  session.onClose((store) => {
    curves.clear()
    const reason = 'The project was closed while this run was under way. It can be resumed where it stood.'
    const waiting = queue.splice(0)
    for (const { runId, task } of waiting) {
      stand(store, runId, { state: 'interrupted', reason })
      task.drop()
    }
    if (current === null) return
    stand(store, current.runId, { state: 'interrupted', reason })
    current.task.cancel()
  })

  return {
    'runs.start': ({ netlistId, patternSetId, detectionLimit }) => {
      const store = session.writable()
      const { productId } = found(store.netlists.get(netlistId))
      const patternSet = found(store.patternSets.get(patternSetId))
      if (patternSet.netlistId !== netlistId) {
        throw new AppError(
          'bad-input',
          'These patterns were read for another netlist revision. Read them again for this one.',
        )
      }
      const id = store.runs.create({
        productId,
        netlistId,
        patternSetId,
        detectionLimit,
        patternsTotal: patternSet.account.patterns,
        createdAtMs: now(),
        engine,
      })
      return enqueue(store, found(store.runs.get(id)))
    },
    'runs.cancel': async ({ id }) => {
      const store = session.writable()
      found(store.runs.get(id))
      const waiting = queue.find((entry) => entry.store === store && entry.runId === id)
      if (waiting !== undefined) waiting.task.cancel()
      else if (current?.store === store && current.runId === id) current.task.cancel()
      return found(store.runs.get(id))
    },
    'runs.resume': ({ id }) => {
      const store = session.writable()
      const run = found(store.runs.get(id))
      if (isUnderWay(run.state) || run.state === 'done') return run
      return enqueue(store, run)
    },
    'runs.curve': ({ id }) => ({ detected: curves.get(id) ?? null }),
    'runs.delete': ({ id }) => {
      const { runs, trash } = session.writable()
      const run = found(runs.get(id))
      if (isUnderWay(run.state)) throw new AppError('in-use', 'The run is under way. Cancel it first.')
      const undoToken = randomUUID()
      trash.remove('run', id, undoToken)
      changed(run)
      return { undoToken }
    },
  }
}

/** Returns what a run under way has reached: "96.41 % so far"; empty before its first segment. */
function soFarOf({ figures }: Run): string {
  return figures === null ? '' : `${textOf(formats.coverage(figures.coverage))} so far`
}
