/**
 * A function of a cell's pins and states. Variable i < pins.length is pin i; pins.length + 2s is the output of state s and
 * pins.length + 2s + 1 its inverse.
 */
export type CellFunction =
  | { readonly kind: 'constant'; readonly value: 0 | 1 | 'X' }
  | { readonly kind: 'variable'; readonly index: number }
  | { readonly kind: 'not'; readonly of: CellFunction }
  | { readonly kind: 'and' | 'or' | 'xor'; readonly of: readonly CellFunction[] }

/** One bit of a cell's pins. */
export type CellPin = {
  readonly name: string
  readonly direction: 'input' | 'output' | 'inout' | 'internal'
  /** What an output computes; null where the library does not say it as a function. */
  readonly function: CellFunction | null
  /** Where it is 1 the output drives nothing. */
  readonly threeState: CellFunction | null
  /** True for a pin that only holds its net's last value. */
  readonly isBusHold: boolean
}

/** A pin as netlists name it, with its bits from the left; a scalar has one. */
export type CellPort = { readonly name: string; readonly pins: readonly number[] }

/** A bit that a cell stores. */
export type CellState = {
  readonly kind: 'flip-flop' | 'latch'
  /** Flip-flop: what it takes at the clock's edge. Latch: what it takes while enabled. */
  readonly next: CellFunction
  /** Flip-flop: it takes `next` where this rises. Latch: it is open while this is 1. */
  readonly clock: CellFunction
  readonly clear: CellFunction | null
  readonly preset: CellFunction | null
  /** What the output and its inverse hold while clear and preset are both active. */
  readonly both: readonly [0 | 1 | 'X', 0 | 1 | 'X']
}

/** What the library says about scan: pins of `LibraryCell.pins`. */
export type CellScan = {
  readonly scanIn: number
  readonly scanEnable: number
  /** The enable's value while data are shifted. */
  readonly shiftValue: 0 | 1
  /** Outputs that the library names as scan outputs; empty where it names none. */
  readonly scanOut: readonly number[]
}

/**
 * 'physical': no output, so nothing to test (filler, decap, antenna, bus holder). 'clock gate': named as such by the
 * library. 'black box': an output without a function that can be used.
 */
export type CellKind = 'combinational' | 'flip-flop' | 'latch' | 'clock gate' | 'black box' | 'physical'

export type LibraryCell = {
  readonly name: string
  readonly kind: CellKind
  readonly pins: readonly CellPin[]
  /** In the order of the library, supply pins left out. */
  readonly ports: readonly CellPort[]
  /** Supply pins, which netlists may connect and nothing is made of. */
  readonly supplies: readonly string[]
  readonly states: readonly CellState[]
  /** Null: the cell is no scan cell. */
  readonly scan: CellScan | null
}

export type CellLibrary = {
  readonly name: string
  /** The file that it was read from. */
  readonly file: string
  readonly cells: readonly LibraryCell[]
}
