import { z } from 'zod'
import { atMsShape, idShape } from './ids.ts'

/** One piece of long work, for the place that shows them all. */
export const taskShape = z.object({
  id: z.string(),
  kind: z.enum(['import', 'run', 'order', 'ceiling', 'smallest', 'improve', 'export', 'demo']),
  title: z.string(),
  state: z.enum(['queued', 'running', 'done', 'failed', 'cancelled']),
  /** What is being done now, in words. */
  phase: z.string(),
  /** Share done, 0..1; null where it can't be told. */
  share: z.number().min(0).max(1).nullable(),
  /** Seconds left, null until steady. */
  secondsLeft: z.number().nonnegative().nullable(),
  /** For runs: fault-pattern pairs a second. */
  rate: z.number().nonnegative().nullable(),
  startedAtMs: atMsShape,
  endedAtMs: atMsShape.nullable(),
  /** Why it failed, or what it made; while it runs, what has come of it so far. */
  message: z.string().nullable(),
  runId: idShape.nullable(),
  canCancel: z.boolean(),
})

export type Task = z.infer<typeof taskShape>
