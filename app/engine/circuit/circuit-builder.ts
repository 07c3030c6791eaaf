import { GateKind, type Circuit, type LineTable } from './circuit.ts'

/** What stands in the way of a finished circuit. The reader that fed the builder knows the places in its text. */
export type CircuitFault =
  | { readonly kind: 'undriven-net'; readonly net: number }
  | { readonly kind: 'combinational-loop'; readonly nets: readonly number[] }

const NO_DRIVER = 255

/**
 * Collects nets and drivers in any order and finishes them into a Circuit. Nets are numbered as they are first named.
 * Wrong use (a driver for a net that has one, a pin that is no net) throws a RangeError: readers check before they call.
 */
export class CircuitBuilder {
  readonly names: string[] = []
  private readonly netByName = new Map<string, number>()
  private kind = new Uint8Array(1024).fill(NO_DRIVER)
  private faninFrom = new Uint32Array(1024)
  private faninCount = new Uint32Array(1024)
  private pool = new Uint32Array(4096)
  private poolSize = 0
  private readonly inputs: number[] = []
  private readonly outputs: number[] = []
  private readonly flipFlops: number[] = []
  private readonly isOutput = new Set<number>()

  /** The net of that name, made where it is new. */
  net(name: string): number {
    const known = this.netByName.get(name)
    if (known !== undefined) return known
    const net = this.addNet(name)
    this.netByName.set(name, net)
    return net
  }

  /** A new net that `net(name)` does not find, for readers that keep their own name tables. */
  addNet(name: string): number {
    const net = this.names.length
    this.names.push(name)
    if (net >= this.kind.length) this.growNets()
    return net
  }

  get nNets(): number {
    return this.names.length
  }

  isDriven(net: number): boolean {
    return this.kind[net] !== NO_DRIVER
  }

  /** Gives a net its driver, with the driver's inputs in pin order. */
  drive(net: number, kind: GateKind, inputs: readonly number[] | Uint32Array = []): void {
    if (net >= this.names.length || this.kind[net] !== NO_DRIVER) {
      throw new RangeError(
        `net ${net} ${net < this.names.length ? 'has a driver already' : 'does not exist'}`,
      )
    }
    this.kind[net] = kind
    this.faninFrom[net] = this.poolSize
    this.faninCount[net] = inputs.length
    while (this.poolSize + inputs.length > this.pool.length) this.pool = doubled(this.pool)
    this.pool.set(inputs, this.poolSize)
    this.poolSize += inputs.length
    if (kind === GateKind.Input) this.inputs.push(net)
    else if (kind === GateKind.FlipFlop) this.flipFlops.push(net)
  }

  /** Observes a net at a primary output; true unless it was observed already. */
  observe(net: number): boolean {
    if (this.isOutput.has(net)) return false
    this.isOutput.add(net)
    this.outputs.push(net)
    return true
  }

  /** Replaces a net's driver by a source of X, so that a loop through it is cut. */
  cut(net: number): void {
    this.kind[net] = GateKind.Unknown
    this.faninCount[net] = 0
  }

  /**
   * Returns the circuit, its gates in depth-first topological order, or every fault that prevents it: undriven nets first,
   * then, where there are none, one loop for each cycle that the search closes. Call it again after `cut` or `drive`.
   */
  finish(name: string, pins: LineTable | null = null): Circuit | readonly CircuitFault[] {
    const nNets = this.names.length
    const faults: CircuitFault[] = []
    for (let net = 0; net < nNets; net++) {
      if (this.kind[net] === NO_DRIVER) faults.push({ kind: 'undriven-net', net })
    }
    if (faults.length > 0) return faults

    const faninStart = new Uint32Array(nNets + 1)
    for (let net = 0; net < nNets; net++) faninStart[net + 1] = faninStart[net] + this.faninCount[net]
    const fanin = new Uint32Array(faninStart[nNets])
    for (let net = 0; net < nNets; net++) {
      const from = this.faninFrom[net]
      fanin.set(this.pool.subarray(from, from + this.faninCount[net]), faninStart[net])
    }
    const kind = this.kind.slice(0, nNets)
    const sorted = sortGates(kind, faninStart, fanin)
    if (sorted.loops.length > 0) return sorted.loops
    return Object.freeze({
      name,
      nNets,
      names: this.names,
      kind,
      faninStart,
      fanin,
      inputs: Uint32Array.from(this.inputs),
      outputs: Uint32Array.from(this.outputs),
      flipFlops: Uint32Array.from(this.flipFlops),
      order: sorted.order,
      pins,
    })
  }

  private growNets(): void {
    const kind = new Uint8Array(this.kind.length * 2).fill(NO_DRIVER)
    kind.set(this.kind)
    this.kind = kind
    this.faninFrom = doubled(this.faninFrom)
    this.faninCount = doubled(this.faninCount)
  }
}

function doubled(array: Uint32Array<ArrayBuffer>): Uint32Array<ArrayBuffer> {
  const larger = new Uint32Array(array.length * 2)
  larger.set(array)
  return larger
}

/** True for drivers that compute their net from other nets within a pattern. */
export function isGate(kind: number): boolean {
  return kind >= GateKind.Buffer
}

/**
 * Depth-first topological order (Tarjan 1976) with an explicit stack. An edge to a net on the stack closes a loop: its
 * nets are reported once, each driving the next and the last driving the first.
 */
function sortGates(
  kind: Uint8Array,
  faninStart: Uint32Array,
  fanin: Uint32Array,
): { order: Uint32Array; loops: CircuitFault[] } {
  const nNets = kind.length
  const UNSEEN = 0
  const OPEN = 1
  const DONE = 2
  const state = new Uint8Array(nNets)
  const order = new Uint32Array(nNets)
  const stack = new Uint32Array(nNets)
  const next = faninStart.slice(0, nNets)
  const loops: CircuitFault[] = []
  let sorted = 0
  for (let root = 0; root < nNets; root++) {
    if (state[root] !== UNSEEN || !isGate(kind[root])) continue
    let depth = 0
    stack[0] = root
    state[root] = OPEN
    while (depth >= 0) {
      const net = stack[depth]
      if (next[net] === faninStart[net + 1]) {
        state[net] = DONE
        order[sorted++] = net
        depth--
        continue
      }
      const source = fanin[next[net]++]
      if (!isGate(kind[source]) || state[source] === DONE) continue
      if (state[source] === OPEN) {
        const from = stack.lastIndexOf(source, depth)
        loops.push({
          kind: 'combinational-loop',
          nets: Array.from(stack.subarray(from, depth + 1)).reverse(),
        })
        continue
      }
      state[source] = OPEN
      stack[++depth] = source
    }
  }
  return { order: order.slice(0, sorted), loops }
}
