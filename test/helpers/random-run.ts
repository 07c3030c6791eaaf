import type { Circuit } from '../../app/engine/circuit/circuit.ts'
import { patternWidth } from '../../app/engine/circuit/circuit.ts'
import { buildFaultList } from '../../app/engine/faults/build-fault-list.ts'
import type { FaultList } from '../../app/engine/faults/fault-list.ts'
import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import type { DetectionMatrix } from '../../app/engine/simulate/detection-profile.ts'
import { emptyPlane, type PatternSet } from '../../app/engine/simulate/pattern-set.ts'
import { simulateTwin } from '../../app/engine/simulate/twin.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import type { Source } from '../../app/engine/source/source.ts'

export type RandomRun = {
  readonly circuit: Circuit
  readonly faults: FaultList
  readonly matrix: DetectionMatrix
  /** The size of each row's class. */
  readonly weights: Float64Array
}

/** Returns a set of random patterns: every input bit 0 or 1 with equal chance. */
export function randomPatterns(circuit: Circuit, nPatterns: number, seed: number): PatternSet {
  const random = createRandom(seed)
  const value = emptyPlane(patternWidth(circuit), nPatterns)
  for (let pattern = 0; pattern < nPatterns; pattern++) {
    for (let row = 0; row < value.rows; row++) {
      if (random.bits() & 0x10000)
        value.words[row * value.wordsPerRow + (pattern >>> 5)] |= 1 << (pattern & 31)
    }
  }
  const bursts = [{ name: 'random', first: 0, count: nPatterns }]
  return {
    nPatterns,
    value,
    unknown: null,
    expected: null,
    observed: null,
    cycles: null,
    timeOnly: null,
    bursts,
  }
}

/** Returns which of that many random patterns detect which faults of a `.bench` file. */
export function randomRun(source: Source, nPatterns: number, seed: number): RandomRun {
  const { value, diagnostics } = readBench(source)
  if (value === null) throw new Error(diagnostics[0].message)
  return runOf(value.circuit, randomPatterns(value.circuit, nPatterns, seed))
}

/** Returns which patterns detect which faults of a circuit. */
export function runOf(circuit: Circuit, patterns: PatternSet): RandomRun {
  const faults = buildFaultList(circuit)
  const task = { circuit, faults, patterns, detectionLimit: 0, classes: null, wantMatrix: true }
  const matrix = simulateTwin(task)?.matrix
  if (!matrix) throw new Error('the simulation gave no matrix')
  return {
    circuit,
    faults,
    matrix,
    weights: Float64Array.from(matrix.classOfRow, (one) => faults.classSize[one]),
  }
}
