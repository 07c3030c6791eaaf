import { IntList } from '../../circuit/int-list.ts'
import type { Source } from '../../source/source.ts'

/** Bits that are no signal's, wherever a bit of a module is named. `Open` is an unconnected pin or a `z`. */
export const ConstantBit = { Zero: -1, One: -2, Unknown: -3, Open: -4 } as const

/** What a signal is declared as; flags add up. */
export const SignalFlag = {
  Input: 1,
  Output: 2,
  Inout: 4,
  Supply0: 8,
  Supply1: 16,
  /** Declared by being used, so a declaration may still follow. */
  Implicit: 32,
  /** A trireg: a net that holds its charge. */
  Charge: 64,
  /** Declared with a direction or a type already. */
  Typed: 128,
  /** A statement has used it. */
  Used: 256,
} as const

export const PORT_FLAGS: number = SignalFlag.Input | SignalFlag.Output | SignalFlag.Inout

/**
 * The statements of a module, in the order of the text, in one stream of integers: an operation, its place in the text,
 * then its operands. Bits are local bit numbers or a ConstantBit; names are ids.
 */
export const Operation = {
  /** kind (GateKind), output bit, count, input bits … */
  Gate: 0,
  /** Plain `assign`: target bit, source bit. */
  Connect: 1,
  /** clock bit, Q bit, D bit. */
  FlipFlop: 2,
  /** A three-state gate: output bit, data bit, control bit, flags (1: enabled by 0, 2: inverts). */
  ThreeState: 3,
  /** nmos (0) or pmos (1): output bit, data bit, control bit. */
  Switch: 4,
  /** module name, instance name, 1 where parameters are overridden, number of connections; each: pin name (−1: by position), number of bits, bits msb first. */
  Instance: 5,
} as const

/** Where the statement at that place of the stream ends. */
export function itemEnd(items: Int32Array, at: number): number {
  switch (items[at]) {
    case Operation.Gate:
      return at + 5 + items[at + 4]
    case Operation.Connect:
      return at + 4
    case Operation.FlipFlop:
      return at + 5
    case Operation.Instance: {
      let end = at + 6
      for (let count = items[at + 5]; count > 0; count--) end += 2 + items[end + 1]
      return end
    }
    default:
      return at + 6
  }
}

/** One module as it was written, before anything is known about the modules that it instantiates. */
export class ParsedModule {
  readonly name: number
  readonly source: Source
  /** Offset of the module's name. */
  readonly place: number

  /** Columns of the signals. */
  readonly signalName: IntList = new IntList()
  readonly signalFlags: IntList = new IntList()
  readonly signalMsb: IntList = new IntList()
  readonly signalLsb: IntList = new IntList()
  /** 1 where the signal was declared with a range, so that its bits carry an index. */
  readonly signalIsVector: IntList = new IntList()
  /** The signal's first bit: its leftmost. */
  readonly signalBit: IntList = new IntList()
  readonly signalPlace: IntList = new IntList()

  /** Per local bit: its signal; of an inner net, −2 − 2 × owner bit, or −3 − 2 × owner instance's name. */
  readonly bitSignal: IntList = new IntList()
  /** Per local bit: its index in the vector; of an inner net, its number within the statement. */
  readonly bitIndex: IntList = new IntList()

  /** Signals in the order of the port list. */
  readonly ports: IntList = new IntList()
  /** Signals in the order in which a direction was declared for them. */
  readonly directed: IntList = new IntList()
  readonly items: IntList = new IntList(1024)
  /** True where a parameter's value went into a range or an expression, so that an override would matter. */
  usesParameters = false
  hasSwitches = false

  constructor(name: number, source: Source, place: number) {
    this.name = name
    this.source = source
    this.place = place
  }

  get nBits(): number {
    return this.bitSignal.length
  }

  get nSignals(): number {
    return this.signalName.length
  }

  widthOf(signal: number): number {
    return Math.abs(this.signalMsb.data[signal] - this.signalLsb.data[signal]) + 1
  }

  addSignal(name: number, flags: number, msb: number, lsb: number, isVector: boolean, place: number): number {
    const signal = this.nSignals
    this.signalName.push(name)
    this.signalFlags.push(flags)
    this.signalMsb.push(msb)
    this.signalLsb.push(lsb)
    this.signalIsVector.push(isVector ? 1 : 0)
    this.signalBit.push(this.nBits)
    this.signalPlace.push(place)
    const step = msb >= lsb ? -1 : 1
    for (let index = msb; ; index += step) {
      this.bitSignal.push(signal)
      this.bitIndex.push(index)
      if (index === lsb) break
    }
    return signal
  }
}
