/**
 * The drivers that a net can have. Kernels switch on these numbers, so they never change meaning.
 * `Unknown` drives X always: an unscanned flip-flop, a latch, a black box, a cut loop.
 */
export const GateKind = {
  Input: 0,
  FlipFlop: 1,
  Const0: 2,
  Const1: 3,
  Unknown: 4,
  Buffer: 5,
  Not: 6,
  And: 7,
  Nand: 8,
  Or: 9,
  Nor: 10,
  Xor: 11,
  Xnor: 12,
} as const

export type GateKind = (typeof GateKind)[keyof typeof GateKind]

/**
 * A netlist in its full-scan view, as a struct of arrays. A net is named by its index, 0 to nNets − 1, and stands for
 * its driver too: a gate, an input, or a scanned flip-flop whose output it is.
 *
 * Lists of variable length are in CSR form: the inputs of net n's driver are
 * `fanin[faninStart[n]] … fanin[faninStart[n + 1] − 1]`, nets in pin order. Inputs, constants and unknowns have none;
 * a flip-flop has one, its data net. Apart from flip-flops' data pins the graph has no cycle.
 */
export type Circuit = {
  readonly name: string
  readonly nNets: number
  /** Length nNets. In `.bench` files the declared names; in flattened netlists joined with `/`. */
  readonly names: readonly string[]
  /** Length nNets, values of GateKind. */
  readonly kind: Uint8Array
  /** Length nNets + 1. */
  readonly faninStart: Uint32Array
  readonly fanin: Uint32Array
  /** Nets of the primary inputs, in the netlist's order. */
  readonly inputs: Uint32Array
  /** Nets that primary outputs observe, each once, in the netlist's order. */
  readonly outputs: Uint32Array
  /** Output nets of the scanned flip-flops, in the netlist's order. Their data nets are observed, they are loaded freely. */
  readonly flipFlops: Uint32Array
  /** Gates that evaluate (kinds Buffer to Xnor), each after all of its inputs. */
  readonly order: Uint32Array
  /**
   * Where faults are counted. Null: on every line of the netlist ("lines"). A table: on the listed cell pins alone, since
   * the nets inside cells are the reader's own.
   */
  readonly pins: LineTable | null
}

/** What a line is: a driver's output, a gate's input pin, a flip-flop's data pin, a tap of a primary output, or a pin that no model reaches. */
export const LineKind = { Stem: 0, GateInput: 1, FlipFlopData: 2, OutputTap: 3, Outside: 4 } as const

export type LineKind = (typeof LineKind)[keyof typeof LineKind]

/**
 * The places at which faults sit, one row each; every row carries two faults, stuck at 0 and stuck at 1.
 * Columns have length n.
 */
export type LineTable = {
  readonly n: number
  readonly kind: Uint8Array
  /** The net whose value the line carries; 0xffffffff for one that lies outside and that the circuit lacks. */
  readonly net: Uint32Array
  /** GateInput: the net that the sink gate drives. FlipFlopData: the flip-flop's output net. Else −1. */
  readonly sink: Int32Array
  /** GateInput: the sink's input number from 0. Else 0. */
  readonly pin: Uint32Array
  /** 1 where the line belongs to the scan path, so that the chain test exercises it and simulation leaves it out. */
  readonly byChainTest: Uint8Array
  /** Row names, such as `G7`, `G7>G10.1` or, in mapped netlists, `alu/u3.A`. */
  nameOf(row: number): string
}

/** The state outputs' data nets, length flipFlops.length, in the order of the flip-flops. */
export function dataNets(circuit: Circuit): Uint32Array {
  return circuit.flipFlops.map((net) => circuit.fanin[circuit.faninStart[net]])
}

/** How many values a pattern gives: primary inputs, then flip-flops. */
export function patternWidth(circuit: Circuit): number {
  return circuit.inputs.length + circuit.flipFlops.length
}

/** How many values a pattern can expect: primary outputs, then flip-flop data. */
export function responseWidth(circuit: Circuit): number {
  return circuit.outputs.length + circuit.flipFlops.length
}
