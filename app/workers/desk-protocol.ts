import type { ErrorCode } from '../contract/errors.ts'
import type { CompressJob } from './compress-job.ts'
import type { DeskProgress } from './desk-context.ts'
import type { PlanJobs } from './plan-jobs.ts'
import type { ReadNetlistJob } from './read-netlist-job.ts'
import type { ReadPatternsJob } from './read-patterns-job.ts'
import type { SimulateJob } from './simulate-job.ts'

/** All work that desks do, by name: what goes in, what comes out, and what comes in parts on the way. */
export type DeskJobs = {
  readonly 'read-netlist': ReadNetlistJob
  readonly 'read-patterns': ReadPatternsJob
  readonly compress: CompressJob
  readonly simulate: SimulateJob
} & PlanJobs

export type DeskJobName = keyof DeskJobs

export type ToDesk =
  | {
      readonly type: 'run'
      readonly jobId: number
      readonly name: DeskJobName
      readonly input: unknown
      readonly cancel: SharedArrayBuffer
    }
  | { readonly type: 'cancel'; readonly jobId: number }

export type FromDesk =
  | { readonly type: 'progress'; readonly jobId: number; readonly progress: DeskProgress }
  | { readonly type: 'part'; readonly jobId: number; readonly part: unknown }
  | { readonly type: 'done'; readonly jobId: number; readonly output: unknown }
  | { readonly type: 'cancelled'; readonly jobId: number }
  | {
      readonly type: 'failed'
      readonly jobId: number
      /** Null for a fault in the program. */
      readonly code: ErrorCode | null
      readonly message: string
      readonly details?: unknown
    }
