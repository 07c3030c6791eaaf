import type { Circuit } from './circuit.ts'

/** What a netlist reader understood: the circuit in its full-scan view, its scan chains, and the account of what it could not use. */
export type Netlist = {
  readonly circuit: Circuit
  /** Empty where the netlist has no chains, or (as in `.bench` files) does not show them. */
  readonly chains: readonly ScanChain[]
  /** One for each of circuit.flipFlops. Absent where the format has no clocks, as `.bench`. */
  readonly clocks?: readonly FlipFlopClock[]
  readonly report: NetlistReport
}

/** A scan chain as traced through the netlist. Cells stand in shift order: the first is next to scan-in. */
export type ScanChain = {
  readonly name: string
  readonly scanIn: string
  readonly scanOut: string
  readonly cells: readonly ScanCell[]
}

export type ScanCell = {
  /** Index into circuit.flipFlops. */
  readonly flipFlop: number
  /** The cell's instance, as patterns may name it. */
  readonly instance: string
  /** True where a bit arrives inverted from scan-in at this flip-flop's output. */
  readonly loadInverted: boolean
  /** True where this flip-flop's output arrives inverted at scan-out. */
  readonly unloadInverted: boolean
}

/** Primary inputs that hold one value while patterns capture: clocks at rest, resets off, scan enable in capture. */
export type TestPin = {
  readonly name: string
  readonly role: 'clock' | 'reset' | 'scan-enable' | 'scan-in' | 'fixed'
  readonly value: 0 | 1 | 'X'
  readonly from: 'library' | 'patterns' | 'user'
}

export type UnusableKind =
  | 'unscanned flip-flop'
  | 'latch'
  | 'clock gate'
  | 'three-state net'
  | 'black box'
  | 'cut loop'
  | 'undriven net'
  /** A scanned flip-flop whose capture is not known: its clock is gated, or it captures on the other edge. */
  | 'uncertain capture'

/**
 * One kind of what gives X. What it costs in coverage is the gain of a simulation in which its `sources` are inputs and its
 * `unobserved` nets are outputs.
 */
export type UnusableSource = {
  readonly kind: UnusableKind
  /** How many of the kind there are: flip-flops, cells, nets or loops. */
  readonly count: number
  /** Up to ten names. */
  readonly examples: readonly string[]
  /** Nets of the circuit that carry X from it. */
  readonly sources: Uint32Array
  /** Nets of the circuit that end at it and are not observed there. */
  readonly unobserved: Uint32Array
}

/** How a flip-flop of the full-scan view is clocked. */
export type FlipFlopClock = {
  /** The primary input that it comes from, or null where that is not known. */
  readonly port: string | null
  readonly edge: 'rising' | 'falling'
}

export type NetlistReport = {
  readonly format: string
  readonly top: string
  /** Gates of a netlist of gates, or cell instances that compute something. */
  readonly gates: number
  readonly flipFlops: number
  /** Lines or cell pins at which faults are counted. */
  readonly lines: number
  readonly cellsUsed: readonly { readonly cell: string; readonly count: number }[]
  readonly cellsUnknown: readonly { readonly cell: string; readonly count: number }[]
  /** Sources of X, by kind. */
  readonly unusable: readonly UnusableSource[]
  readonly testPins: readonly TestPin[]
}
