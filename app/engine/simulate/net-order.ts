import { isGate } from '../circuit/circuit-builder.ts'
import type { KernelTask } from './kernel-task.ts'

/**
 * The nets that some observed net depends on, numbered anew in the order in which the kernel walks them: topological,
 * depth first, and the nets of a fan-out-free region one after the other with the region's stem last.
 */
export type NetOrder = {
  /** Length circuit.nNets: the new number of each net, −1 where nothing observed depends on it. */
  readonly slotOf: Int32Array
  /** The old number of each new one. */
  readonly nets: Uint32Array
  /** First slot of each region, and the number of slots at the end. */
  readonly regionStart: Uint32Array
  /** Length circuit.nNets: 1 where a primary output or a flip-flop's data pin observes the net. */
  readonly observed: Uint8Array
  /** Length circuit.nNets: gate inputs that the net feeds, of gates that some observed net depends on. */
  readonly uses: Uint32Array
}

/** True where the net goes to one gate input and nowhere else, so that it belongs to that gate's region. */
export function isInternal(order: Pick<NetOrder, 'observed' | 'uses'>, net: number): boolean {
  return order.uses[net] === 1 && order.observed[net] === 0
}

/**
 * Numbers the nets for the kernel. SOURCE: depth-first topological sorting (Tarjan 1976); fan-out-free regions as in
 * critical path tracing (Abramovici, Menon & Miller 1984).
 */
export function orderNets(circuit: KernelTask['circuit']): NetOrder {
  const { nNets, outputs, flipFlops, fanin, faninStart } = circuit
  const observed = new Uint8Array(nNets)
  for (const net of outputs) observed[net] = 1
  for (const net of flipFlops) observed[fanin[faninStart[net]]] = 1

  const sorted = sortFromObserved(circuit, observed)
  const uses = new Uint32Array(nNets)
  for (const net of sorted) {
    if (!isGate(circuit.kind[net])) continue
    for (let at = faninStart[net]; at < faninStart[net + 1]; at++) uses[fanin[at]]++
  }

  const slotOf = new Int32Array(nNets).fill(-1)
  const nets = new Uint32Array(sorted.length)
  const regionStart = [0]
  const stack: number[] = []
  let placed = 0
  for (const stem of sorted) {
    if (isInternal({ observed, uses }, stem)) continue
    // Stem first and then backwards to the region's start: inputs come before the gate once the run is reversed.
    const start = placed
    stack.push(stem)
    for (let net = stack.pop(); net !== undefined; net = stack.pop()) {
      nets[placed++] = net
      if (!isGate(circuit.kind[net])) continue
      for (let at = faninStart[net]; at < faninStart[net + 1]; at++) {
        if (isInternal({ observed, uses }, fanin[at])) stack.push(fanin[at])
      }
    }
    nets.subarray(start, placed).reverse()
    for (let slot = start; slot < placed; slot++) slotOf[nets[slot]] = slot
    regionStart.push(placed)
  }
  return { slotOf, nets, regionStart: Uint32Array.from(regionStart), observed, uses }
}

/** The nets that observed ones depend on, each after those that it depends on. */
function sortFromObserved(circuit: KernelTask['circuit'], observed: Uint8Array): Uint32Array {
  const { nNets, kind, faninStart, fanin } = circuit
  const seen = new Uint8Array(nNets)
  const sorted = new Uint32Array(nNets)
  const stack = new Uint32Array(nNets)
  const next = faninStart.slice(0, nNets)
  let n = 0
  for (let root = 0; root < nNets; root++) {
    if (observed[root] === 0 || seen[root] === 1) continue
    seen[root] = 1
    stack[0] = root
    for (let depth = 0; depth >= 0;) {
      const net = stack[depth]
      if (!isGate(kind[net]) || next[net] === faninStart[net + 1]) {
        sorted[n++] = net
        depth--
        continue
      }
      const source = fanin[next[net]++]
      if (seen[source] === 1) continue
      seen[source] = 1
      stack[++depth] = source
    }
  }
  return sorted.subarray(0, n)
}
