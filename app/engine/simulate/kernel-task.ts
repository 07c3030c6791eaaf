import type { Circuit, LineTable } from '../circuit/circuit.ts'
import type { PatternSet } from './pattern-set.ts'
import type { SimulationTask } from './simulation.ts'

/** What the kernel needs of a task: arrays alone, so that it can be handed from thread to thread. */
export type KernelTask = {
  readonly circuit: Pick<
    Circuit,
    'nNets' | 'kind' | 'faninStart' | 'fanin' | 'inputs' | 'outputs' | 'flipFlops'
  >
  readonly lines: Pick<LineTable, 'kind' | 'net' | 'sink' | 'pin' | 'byChainTest'>
  readonly nClasses: number
  readonly representative: Uint32Array
  readonly classes: Uint32Array | null
  readonly patterns: Pick<PatternSet, 'nPatterns' | 'value' | 'unknown' | 'observed' | 'timeOnly'>
  readonly detectionLimit: number
  readonly wantMatrix: boolean
  /** Detections in a block at which it reports of a class the count alone; null: blocks report nothing. */
  readonly easyFrom: number | null
}

/** Returns the arrays of a task, without names and whatever else the kernel does not read. Nothing is copied. */
export function kernelTaskOf(task: SimulationTask, easyFrom: number | null = null): KernelTask {
  const { nNets, kind, faninStart, fanin, inputs, outputs, flipFlops } = task.circuit
  const { lines, nClasses, representative } = task.faults
  const { nPatterns, value, unknown, observed, timeOnly } = task.patterns
  return {
    circuit: { nNets, kind, faninStart, fanin, inputs, outputs, flipFlops },
    lines: {
      kind: lines.kind,
      net: lines.net,
      sink: lines.sink,
      pin: lines.pin,
      byChainTest: lines.byChainTest,
    },
    nClasses,
    representative,
    classes: task.classes,
    patterns: { nPatterns, value, unknown, observed, timeOnly },
    detectionLimit: task.detectionLimit,
    wantMatrix: task.wantMatrix,
    easyFrom,
  }
}
