import { randomUUID } from 'node:crypto'
import { AppError } from '../contract/errors.ts'
import type { Handlers } from '../contract/handlers.ts'
import type { Task } from '../contract/shapes/task.ts'
import type { EventHub } from './event-hub.ts'

export type TaskProgress = {
  readonly phase: string
  /** 0..1; null where it can't be told. */
  readonly share: number | null
  readonly rate?: number
  /** What has come of it so far, in words. */
  readonly soFar?: string
}

/** What came of a task, in words; work that was done may have found that something is wrong. */
export type Outcome = string | { readonly failed: string }

export type TaskContext = {
  readonly signal: AbortSignal
  report(progress: TaskProgress): void
}

export type TaskStart = Pick<Task, 'kind' | 'title'> & { readonly runId?: number }

/** Work that has been entered in the list and waits for its turn. */
export type QueuedTask = {
  readonly id: string
  readonly signal: AbortSignal
  cancel(): void
  /** Takes it out again without doing it. */
  drop(): void
  run<T>(work: (context: TaskContext) => Promise<T>, outcomeOf?: (result: T) => Outcome): Promise<T>
}

export type Tasks = {
  readonly handlers: Pick<Handlers, 'tasks.list' | 'tasks.cancel'>
  enqueue(start: TaskStart): QueuedTask
  /** Does a piece of work at once, in the sight of the list. */
  run<T>(
    start: TaskStart,
    work: (context: TaskContext) => Promise<T>,
    outcomeOf?: (result: T) => Outcome,
  ): Promise<T>
  cancelAll(): void
}

const EVENT_EVERY_MS = 100
const ENDED_KEPT = 50
/** A rest is told once the work has gone on for so long and so far. */
const STEADY_MS = 1500
const STEADY_SHARE = 0.02

/** The one list of all long work: what is under way, how far it is, how it ended. */
export function createTasks(events: EventHub, now: () => number): Tasks {
  const tasks = new Map<string, Task>()
  const controllers = new Map<string, AbortController>()
  const toldAtMs = new Map<string, number>()

  const set = (task: Task, always: boolean): void => {
    tasks.set(task.id, task)
    if (!always && now() - (toldAtMs.get(task.id) ?? -Infinity) < EVENT_EVERY_MS) return
    toldAtMs.set(task.id, now())
    events.emit('task', task)
  }

  const change = (id: string, changes: Partial<Task>, always: boolean): void => {
    const task = tasks.get(id)
    if (task !== undefined) set({ ...task, ...changes }, always)
  }

  const end = (id: string, state: Task['state'], message: string | null): void => {
    const share = state === 'done' ? { share: 1 } : {}
    change(id, { state, message, endedAtMs: now(), secondsLeft: null, canCancel: false, ...share }, true)
    controllers.delete(id)
    toldAtMs.delete(id)
    const ended = [...tasks.values()].filter((task) => task.endedAtMs !== null)
    for (const task of ended.slice(0, -ENDED_KEPT)) tasks.delete(task.id)
  }

  const enqueue = ({ kind, title, runId }: TaskStart): QueuedTask => {
    const id = randomUUID()
    const controller = new AbortController()
    controllers.set(id, controller)
    set(
      {
        id,
        kind,
        title,
        state: 'queued',
        phase: 'Waiting',
        share: null,
        secondsLeft: null,
        rate: null,
        startedAtMs: now(),
        endedAtMs: null,
        message: null,
        runId: runId ?? null,
        canCancel: true,
      },
      true,
    )
    return {
      id,
      signal: controller.signal,
      cancel: () => controller.abort(),
      drop: () => end(id, 'cancelled', null),
      async run(work, outcomeOf) {
        const startedAtMs = now()
        change(id, { state: 'running', phase: 'Starting', startedAtMs }, true)
        const report = ({ phase, share, rate, soFar }: TaskProgress): void => {
          const secondsLeft = share === null ? null : restOf(share, now() - startedAtMs)
          change(id, { phase, share, rate: rate ?? null, secondsLeft, message: soFar ?? null }, false)
        }
        try {
          const result = await work({ signal: controller.signal, report })
          const outcome = outcomeOf?.(result) ?? null
          if (outcome === null || typeof outcome === 'string') end(id, 'done', outcome)
          else end(id, 'failed', outcome.failed)
          return result
        } catch (error) {
          const isCancelled = error instanceof AppError && error.code === 'cancelled'
          const message = error instanceof Error ? error.message : String(error)
          end(id, isCancelled ? 'cancelled' : 'failed', isCancelled ? null : message)
          throw error
        }
      },
    }
  }

  const handlers: Pick<Handlers, 'tasks.list' | 'tasks.cancel'> = {
    'tasks.list': () => ({ tasks: [...tasks.values()] }),
    'tasks.cancel': ({ id }) => {
      controllers.get(id)?.abort()
      return {}
    },
  }
  return {
    handlers,
    enqueue,
    run: (start, work, outcomeOf) => enqueue(start).run(work, outcomeOf),
    cancelAll: () => {
      for (const controller of controllers.values()) controller.abort()
    },
  }
}

function restOf(share: number, elapsedMs: number): number | null {
  if (elapsedMs < STEADY_MS || share < STEADY_SHARE) return null
  return ((elapsedMs / 1000) * (1 - share)) / share
}
