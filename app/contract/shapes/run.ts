import { z } from 'zod'
import { atMsShape, idShape } from './ids.ts'

const count = z.number().int().nonnegative()

export const runStateShape = z.enum(['queued', 'running', 'done', 'failed', 'cancelled', 'interrupted'])

/** One coverage run: a pattern set simulated on a netlist. */
export const runShape = z.object({
  id: idShape,
  productId: idShape,
  number: count,
  netlistId: idShape,
  patternSetId: idShape,
  state: runStateShape,
  /** 1: first detection; N: up to N; 0: every detection counted. */
  detectionLimit: count,
  createdAtMs: atMsShape,
  endedAtMs: atMsShape.nullable(),
  patternsDone: count,
  patternsTotal: count,
  /** Share done, 0..1. */
  progress: z.number().min(0).max(1),
  seconds: z.number().nonnegative(),
  /** Null until there is something to tell; while running, the figures so far. */
  figures: z
    .object({
      faults: count,
      collapsedFaults: count,
      detected: count,
      collapsedDetected: count,
      possibly: count,
      byChainTest: count,
      coverage: z.number().min(0).max(1),
    })
    .nullable(),
  /** Why it failed, in words for the user. */
  reason: z.string().nullable(),
  engine: z.string(),
})

export type RunState = z.infer<typeof runStateShape>
export type Run = z.infer<typeof runShape>
