import type { LineTable } from '../circuit/circuit.ts'

/**
 * Single stuck-at faults of a circuit. Fault f sits on line `f >> 1` and is stuck at `f & 1`, so nFaults = 2 × lines.
 * Equivalent faults share a class; simulation works on classes, figures count faults.
 */
export type FaultList = {
  readonly base: FaultBase
  readonly lines: LineTable
  readonly nFaults: number
  /** The number of collapsed faults. */
  readonly nClasses: number
  /** Length nFaults: the class of each fault, numbered by first appearance. */
  readonly classOf: Uint32Array
  /** Length nClasses: the fault that is simulated for the class; the others have the same effect at every output. */
  readonly representative: Uint32Array
  /** Length nClasses: how many faults of the list the class holds. */
  readonly classSize: Uint32Array
}

export type FaultBase = 'lines' | 'cell pins'

/** The name of fault f, such as `G7>G10.1/0`. */
export function faultName(faults: FaultList, fault: number): string {
  return `${faults.lines.nameOf(fault >>> 1)}/${fault & 1}`
}
