import type { Circuit } from '../circuit/circuit.ts'
import type { FaultList } from '../faults/fault-list.ts'
import type { PatternSet } from './pattern-set.ts'
import type { DetectionMatrix, DetectionProfile } from './detection-profile.ts'

/** What to simulate, and how far. The same for every backend: the TypeScript twin, WebAssembly, one thread or several. */
export type SimulationTask = {
  readonly circuit: Circuit
  readonly faults: FaultList
  readonly patterns: PatternSet
  readonly detectionLimit: number
  /** Classes to simulate, ascending; null for all that are not by the chain test. */
  readonly classes: Uint32Array | null
  /** Also keep which patterns detect which class (needs detectionLimit 0). */
  readonly wantMatrix: boolean
}

export type SimulationResult = {
  readonly profile: DetectionProfile
  readonly matrix: DetectionMatrix | null
}

/**
 * Called by a backend at the end of each block of patterns; `false` stops the simulation at once.
 * A stopped simulation returns null.
 */
export type BlockObserver = (patternsDone: number) => boolean
