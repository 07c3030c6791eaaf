import { z } from 'zod'
import { taskShape } from './shapes/task.ts'

/** What the host tells without being asked; events say what happened, they never control anything. */
export const events = {
  /** A task began, moved on (at most ten times a second) or ended. */
  task: taskShape,
  /** Something in the project is different: whoever shows it asks again. */
  changed: z.object({
    noun: z.enum(['project', 'product', 'netlist', 'pattern-set', 'run', 'tester', 'budget', 'settings']),
    productId: z.number().int().nullable(),
  }),
} as const

export type EventName = keyof typeof events
export type EventPayload<N extends EventName> = z.infer<(typeof events)[N]>
