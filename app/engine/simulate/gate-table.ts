import { GateKind } from '../circuit/circuit.ts'
import { isGate } from '../circuit/circuit-builder.ts'
import type { KernelTask } from './kernel-task.ts'
import { isInternal, type NetOrder } from './net-order.ts'

/** Gate classes of the kernel, and where an operation keeps its parts. */
const SOURCE = 0
const ONE_INPUT = 1
const AND_2 = 2
const XOR_2 = 3
const AND_N = 4
const XOR_N = 5
const CLASS_SHIFT = 3
const FIRST_INVERTED = 1
const SECOND_INVERTED = 2
const OUTPUT_INVERTED = 4
const WATCHED = 1 << 8
const WATCHED_BY_MASK = 2 << 8
const STEM = 1 << 10

/**
 * The circuit as the kernel evaluates it. Inverters and buffers inside a region are taken into their neighbours: one
 * that only one gate feeds computes that gate's function itself, one that feeds only one gate becomes an inverted input
 * of it. They keep their own records for fault-free values, but no effect is propagated through them.
 */
export type GateTable = {
  /** Four words a net and one record at the end: operation, two inputs (or start and number of listed ones), first fan-out. */
  readonly records: Uint32Array
  /** Listed inputs: slot << 1 | inverted. */
  readonly inputs: Uint32Array
  /** The gates to evaluate when a net changes, ascending. */
  readonly fanouts: Uint32Array
}

/** Builds the records of all gates in their new order. */
export function buildGateTable(circuit: KernelTask['circuit'], order: NetOrder, masked: boolean): GateTable {
  const { kind, faninStart, fanin } = circuit
  const { nets, slotOf } = order
  const n = nets.length
  const records = new Uint32Array(4 * (n + 1))
  const absorbed = new Uint8Array(n)
  const listed: number[] = []

  /** The slot that an input pin reads and whether inverted, past an inverter that belongs to this gate alone. */
  const readBy = (source: number): number => {
    const slot = slotOf[source]
    if (!isInternal(order, source) || records[4 * slot] >>> CLASS_SHIFT !== ONE_INPUT) return slot << 1
    absorbed[slot] = 1
    return (records[4 * slot + 1] << 1) | (records[4 * slot] & OUTPUT_INVERTED ? 1 : 0)
  }

  for (let slot = 0; slot < n; slot++) {
    const net = nets[slot]
    if (!isGate(kind[net])) continue
    const first = faninStart[net]
    const count = faninStart[net + 1] - first
    const inverts = isInverting(kind[net]) ? OUTPUT_INVERTED : 0
    const at = 4 * slot
    if (count === 1) {
      const source = slotOf[fanin[first]]
      if (isInternal(order, fanin[first]) && records[4 * source] !== SOURCE) {
        absorbed[source] = 1
        records.copyWithin(at, 4 * source, 4 * source + 3)
        records[at] ^= inverts
      } else {
        records[at] = (ONE_INPUT << CLASS_SHIFT) | inverts
        records[at + 1] = records[at + 2] = source
      }
      continue
    }
    const isXor = kind[net] === GateKind.Xor || kind[net] === GateKind.Xnor
    // OR is AND with inputs and output inverted.
    const isOr = kind[net] === GateKind.Or || kind[net] === GateKind.Nor
    const output = isOr ? inverts ^ OUTPUT_INVERTED : inverts
    if (count === 2) {
      const a = readBy(fanin[first]) ^ Number(isOr)
      const b = readBy(fanin[first + 1]) ^ Number(isOr)
      records[at + 1] = a >>> 1
      records[at + 2] = b >>> 1
      records[at] = isXor
        ? (XOR_2 << CLASS_SHIFT) | (output ^ ((a ^ b) & 1 ? OUTPUT_INVERTED : 0))
        : (AND_2 << CLASS_SHIFT) | output | (a & 1 ? FIRST_INVERTED : 0) | (b & 1 ? SECOND_INVERTED : 0)
      continue
    }
    records[at] = ((isXor ? XOR_N : AND_N) << CLASS_SHIFT) | output
    records[at + 1] = listed.length
    records[at + 2] = count
    for (let pin = first; pin < first + count; pin++) listed.push(readBy(fanin[pin]) ^ Number(isOr))
  }
  const inputs = Uint32Array.from(listed)
  const fanouts = listFanouts(records, inputs, absorbed)
  for (let slot = 0; slot < n; slot++) {
    if (order.observed[nets[slot]] === 1) records[4 * slot] |= masked ? WATCHED_BY_MASK : WATCHED
  }
  for (let region = 1; region < order.regionStart.length; region++) {
    records[4 * (order.regionStart[region] - 1)] |= STEM
  }
  return { records, inputs, fanouts }
}

/** The operation of a gate as it stands in the netlist, without what it has taken in. */
export function operationOf(kind: number, inputs: number): number {
  const inverts = isInverting(kind) ? OUTPUT_INVERTED : 0
  if (inputs === 1) return (ONE_INPUT << CLASS_SHIFT) | inverts
  if (kind === GateKind.Xor || kind === GateKind.Xnor)
    return ((inputs === 2 ? XOR_2 : XOR_N) << CLASS_SHIFT) | inverts
  const isOr = kind === GateKind.Or || kind === GateKind.Nor
  const inward = isOr ? FIRST_INVERTED | SECOND_INVERTED : 0
  const output = isOr ? inverts ^ OUTPUT_INVERTED : inverts
  return ((inputs === 2 ? AND_2 : AND_N) << CLASS_SHIFT) | inward | output
}

function isInverting(kind: number): boolean {
  return kind === GateKind.Not || kind === GateKind.Nand || kind === GateKind.Nor || kind === GateKind.Xnor
}

/** Lists each net's fan-outs and writes into the records where they start. */
function listFanouts(records: Uint32Array, inputs: Uint32Array, absorbed: Uint8Array): Uint32Array {
  const n = absorbed.length
  const forEachInput = (slot: number, visit: (source: number) => void): void => {
    const at = 4 * slot
    const gateClass = records[at] >>> CLASS_SHIFT
    if (gateClass === SOURCE || absorbed[slot] === 1) return
    if (gateClass >= AND_N) {
      for (let input = 0; input < records[at + 2]; input++) visit(inputs[records[at + 1] + input] >>> 1)
      return
    }
    visit(records[at + 1])
    if (records[at + 2] !== records[at + 1]) visit(records[at + 2])
  }
  for (let slot = 0; slot < n; slot++) forEachInput(slot, (source) => void records[4 * source + 7]++)
  for (let slot = 0; slot < n; slot++) records[4 * slot + 7] += records[4 * slot + 3]
  const fanouts = new Uint32Array(records[4 * n + 3])
  const next = new Uint32Array(n)
  for (let slot = 0; slot < n; slot++) next[slot] = records[4 * slot + 3]
  for (let slot = 0; slot < n; slot++) forEachInput(slot, (source) => void (fanouts[next[source]++] = slot))
  return fanouts
}
