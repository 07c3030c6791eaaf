import { GateKind } from './circuit.ts'
import { isGate } from './circuit-builder.ts'
import type { NetGraph } from './net-graph.ts'

/** Where a walk back through a graph ended, and whether the value arrives inverted from there. */
export type Origin = { readonly net: number; readonly inverted: boolean }

/** −1 where a net's value is not constant. */
export const NOT_CONSTANT = -1

/**
 * Returns every net's constant value (0, 1 or −1) while the given nets are held: constants spread forward through gates
 * that they decide. Takes time linear in the graph.
 */
export function spreadConstants(graph: NetGraph, held: ReadonlyMap<number, 0 | 1>): Int8Array {
  const { nNets } = graph
  const value = new Int8Array(nNets).fill(NOT_CONSTANT)
  const pending: number[] = []
  const settle = (net: number, to: number): void => {
    value[net] = to
    pending.push(net)
  }
  for (let net = 0; net < nNets; net++) {
    const kind = graph.kind.data[net]
    if (kind === GateKind.Const0) settle(net, 0)
    else if (kind === GateKind.Const1) settle(net, 1)
  }
  for (const [net, to] of held) if (value[net] === NOT_CONSTANT) settle(net, to)
  if (pending.length === 0) return value
  const { start, sinks } = fanout(graph)
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    for (let at = start[net]; at < start[net + 1]; at++) {
      const sink = sinks[at]
      if (value[sink] !== NOT_CONSTANT) continue
      const result = evaluate(graph, sink, value)
      if (result !== NOT_CONSTANT) settle(sink, result)
    }
  }
  return value
}

/** Lists each net's gates that it feeds, in CSR form. */
function fanout(graph: NetGraph): { start: Uint32Array; sinks: Uint32Array } {
  const { nNets } = graph
  const start = new Uint32Array(nNets + 1)
  for (let net = 0; net < nNets; net++) {
    if (!isGate(graph.kind.data[net])) continue
    for (let k = graph.count(net) - 1; k >= 0; k--) start[graph.input(net, k) + 1]++
  }
  for (let net = 0; net < nNets; net++) start[net + 1] += start[net]
  const sinks = new Uint32Array(start[nNets])
  const next = start.slice(0, nNets)
  for (let net = 0; net < nNets; net++) {
    if (!isGate(graph.kind.data[net])) continue
    for (let k = graph.count(net) - 1; k >= 0; k--) sinks[next[graph.input(net, k)]++] = net
  }
  return { start, sinks }
}

function evaluate(graph: NetGraph, net: number, value: Int8Array): number {
  const kind = graph.kind.data[net]
  const count = graph.count(net)
  const isAnd = kind === GateKind.And || kind === GateKind.Nand
  const isOr = kind === GateKind.Or || kind === GateKind.Nor
  const inverts = isInverting(kind) ? 1 : 0
  let parity = 0
  let isKnown = true
  for (let k = 0; k < count; k++) {
    const input = value[graph.input(net, k)]
    if (input === NOT_CONSTANT) isKnown = false
    else if ((isAnd && input === 0) || (isOr && input === 1)) return input ^ inverts
    else parity ^= input
  }
  if (!isKnown) return NOT_CONSTANT
  if (isAnd) return 1 ^ inverts
  return isOr ? inverts : parity ^ inverts
}

function isInverting(kind: number): boolean {
  return kind === GateKind.Not || kind === GateKind.Nand || kind === GateKind.Nor || kind === GateKind.Xnor
}

/**
 * Walks back from a net through every gate that passes one input alone while the constants hold: buffers, inverters, and
 * gates all of whose other inputs are constant. Returns where that ends: an input, a flip-flop, or a gate that mixes.
 */
export function traceBack(graph: NetGraph, constants: Int8Array, from: number): Origin {
  let net = from
  let inverted = false
  for (let steps = graph.nNets; steps > 0; steps--) {
    const kind = graph.kind.data[net]
    if (!isGate(kind) || constants[net] !== NOT_CONSTANT) break
    let open = -1
    let parity = isInverting(kind) ? 1 : 0
    let isMixed = false
    for (let k = graph.count(net) - 1; k >= 0; k--) {
      const input = graph.input(net, k)
      if (constants[input] === NOT_CONSTANT) {
        if (open >= 0) isMixed = true
        open = input
      } else if (kind === GateKind.Xor || kind === GateKind.Xnor) parity ^= constants[input]
    }
    if (isMixed || open < 0) break
    net = open
    inverted = inverted !== (parity === 1)
  }
  return { net, inverted }
}
