import type { MessagePort } from 'node:worker_threads'
import type { BlockReport } from '../engine/simulate/block-report.ts'
import type { DetectionMatrix, DetectionProfile } from '../engine/simulate/detection-profile.ts'
import type { Units } from '../engine/simulate/kernel.ts'
import type { KernelLayout } from '../engine/simulate/kernel-layout.ts'
import type { KernelTask } from '../engine/simulate/kernel-task.ts'

/** A point from which a simulation can go on: all patterns before `patternsDone` are in the profile, none after. */
export type SimulationCheckpoint = {
  readonly patternsDone: number
  readonly profile: DetectionProfile
}

/** Handed to every thread of a pool at its start. Helpers hear from the coordinator alone, over a port of their own. */
export type SimulateWorkerData =
  | { readonly role: 'coordinator'; readonly wasmBytes: Uint8Array; readonly helpers: readonly MessagePort[] }
  | { readonly role: 'helper'; readonly wasmBytes: Uint8Array; readonly coordinator: MessagePort }

export type RunRequest = {
  readonly run: number
  readonly task: KernelTask
  readonly threads: number
  readonly resumeFrom: SimulationCheckpoint | null
  readonly wantCheckpoints: boolean
  readonly control: SharedArrayBuffer
}

export type JoinRequest = {
  readonly run: number
  readonly memory: WebAssembly.Memory
  readonly layout: KernelLayout
  readonly units: Units
  readonly thread: number
  readonly control: SharedArrayBuffer
}

export type RunReport =
  | { readonly run: number; readonly kind: 'block'; readonly block: BlockReport }
  | { readonly run: number; readonly kind: 'checkpoint'; readonly checkpoint: SimulationCheckpoint }
  | {
      readonly run: number
      readonly kind: 'done'
      readonly profile: DetectionProfile
      readonly matrix: DetectionMatrix | null
      readonly kernelSeconds: number
      readonly memoryBytes: number
    }
  | { readonly run: number; readonly kind: 'cancelled'; readonly checkpoint: SimulationCheckpoint }
  | { readonly run: number; readonly kind: 'failed'; readonly message: string }

/** Words of the control block that threads of one run share. */
export const Control = {
  /** 1 once the run is to stop at once. */
  Cancel: 0,
  /** The next unit of work that nobody has claimed; CLOSED while the threads are to come to rest. */
  NextUnit: 1,
  /** Helpers that hold a unit, or are about to claim one. */
  Busy: 2,
  /** Counts up when there may be work; helpers sleep on it. */
  Generation: 3,
  /** 1 once the run is over and helpers go home. */
  Over: 4,
  UnitsDone: 5,
  /** How many units the run has; 0 until it has been packed. */
  Units: 6,
  /** Block reports that have been sent and not yet been taken. */
  Reports: 7,
  /** Length of the block. */
  words: 8,
} as const

export const CLOSED = 0x3fffffff
