import { GateKind } from './circuit.ts'
import { IntList } from './int-list.ts'

/** In `kind`: nothing drives the net. */
export const NO_DRIVER = 255

/**
 * Nets and their drivers while a netlist is still being understood: unlike a Circuit it may have undriven nets, loops and
 * nets that nobody uses, and drivers may be replaced. A net is a number; names are kept elsewhere.
 */
export class NetGraph {
  /** Per net: its driver's GateKind, or NO_DRIVER. */
  readonly kind: IntList = new IntList(1024)
  private readonly faninFrom = new IntList(1024)
  private readonly faninCount = new IntList(1024)
  /** The drivers' inputs; those of net n are `fanin.data[from(n)] …`, `count(n)` of them. */
  readonly fanin: IntList = new IntList(4096)

  get nNets(): number {
    return this.kind.length
  }

  addNet(): number {
    this.kind.push(NO_DRIVER)
    this.faninFrom.push(0)
    this.faninCount.push(0)
    return this.kind.length - 1
  }

  isDriven(net: number): boolean {
    return this.kind.data[net] !== NO_DRIVER
  }

  /** Sets the net's driver, in place of the one that it had. */
  drive(net: number, kind: GateKind, ...inputs: readonly number[]): void {
    this.open(net, kind)
    for (const input of inputs) this.addInput(net, input)
  }

  /** Sets a driver whose inputs follow by `addInput`, before any other net is driven. */
  open(net: number, kind: GateKind): void {
    this.kind.data[net] = kind
    this.faninFrom.data[net] = this.fanin.length
    this.faninCount.data[net] = 0
  }

  addInput(net: number, input: number): void {
    this.fanin.push(input)
    this.faninCount.data[net]++
  }

  /** A new net with that driver. */
  gate(kind: GateKind, ...inputs: readonly number[]): number {
    const net = this.addNet()
    this.drive(net, kind, ...inputs)
    return net
  }

  from(net: number): number {
    return this.faninFrom.data[net]
  }

  count(net: number): number {
    return this.faninCount.data[net]
  }

  /** Input number k of the net's driver. */
  input(net: number, k: number): number {
    return this.fanin.data[this.faninFrom.data[net] + k]
  }

  setInput(net: number, k: number, input: number): void {
    this.fanin.data[this.faninFrom.data[net] + k] = input
  }

  inputs(net: number): Int32Array {
    return this.fanin.view(this.from(net), this.from(net) + this.count(net))
  }
}

/** True for a driver that passes one net on, straight or inverted. */
export function isRepeater(kind: number): boolean {
  return kind === GateKind.Buffer || kind === GateKind.Not
}
