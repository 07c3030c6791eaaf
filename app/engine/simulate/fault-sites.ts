import { GateKind, LineKind } from '../circuit/circuit.ts'
import { isGate } from '../circuit/circuit-builder.ts'
import type { KernelTask } from './kernel-task.ts'
import { isInternal, type NetOrder } from './net-order.ts'

export const NO_CLASS = 0xffffffff

/** Where the kernel looks for each fault class; columns of classes hold NO_CLASS where there is none. */
export type FaultSites = {
  /** Length 2 × slots: the class of a net stuck at 0 and at 1. */
  readonly netClasses: Uint32Array
  /** Twice as long as circuit.fanin: the class of a gate's input pin stuck at 0 and at 1. */
  readonly pinClasses: Uint32Array
  /** Faults that one response row alone observes. */
  readonly taps: readonly Tap[]
  /** Pairs of classes with the same effect at every output: the first gets the second's result. */
  readonly twins: readonly (readonly [number, number])[]
  /** How many classes are simulated, twins not counted. */
  readonly nActive: number
}

export type Tap = { readonly slot: number; readonly row: number; readonly classes: [number, number] }

/**
 * Finds the place of each class that is to be simulated. A fault at a gate's input that forces the gate's output moves
 * to that output, within its region, so that the kernel has one place for it that is cheap to look at.
 */
export function placeFaults(task: KernelTask, order: NetOrder): FaultSites {
  const { circuit, lines, representative } = task
  const netClasses = new Uint32Array(2 * order.nets.length).fill(NO_CLASS)
  const pinClasses = new Uint32Array(2 * circuit.fanin.length).fill(NO_CLASS)
  const taps = new Map<number, Tap>()
  const twins: [number, number][] = []
  const sinkPin = onlySinks(circuit, order)
  const rowOf = responseRows(circuit)
  let nActive = 0

  const put = (column: Uint32Array | [number, number], at: number, group: number): void => {
    if (column[at] === NO_CLASS) {
      column[at] = group
      nActive++
    } else twins.push([group, column[at]])
  }

  const place = (group: number): void => {
    const line = representative[group] >>> 1
    let stuck = representative[group] & 1
    let net = lines.net[line]
    let pin = -1
    switch (lines.kind[line]) {
      case LineKind.Outside:
        return
      case LineKind.OutputTap:
      case LineKind.FlipFlopData: {
        const row = lines.kind[line] === LineKind.OutputTap ? rowOf.output[net] : rowOf.data[lines.sink[line]]
        let tap = taps.get(row)
        if (tap === undefined)
          taps.set(row, (tap = { slot: order.slotOf[net], row, classes: [NO_CLASS, NO_CLASS] }))
        put(tap.classes, stuck, group)
        return
      }
      case LineKind.GateInput:
        if (order.slotOf[lines.sink[line]] < 0) return
        pin = circuit.faninStart[lines.sink[line]] + lines.pin[line]
    }
    if (order.slotOf[net] < 0) return
    for (;;) {
      const at = pin >= 0 ? pin : isInternal(order, net) ? sinkPin.pin[net] : -1
      if (at < 0) break
      const gate = pin >= 0 ? lines.sink[line] : sinkPin.gate[net]
      const forced = forcedOutput(circuit, gate, stuck)
      if (forced < 0) break
      net = gate
      stuck = forced
      pin = -1
    }
    if (pin >= 0 && !isInternal(order, net)) put(pinClasses, 2 * pin + stuck, group)
    else put(netClasses, 2 * order.slotOf[net] + stuck, group)
  }

  const count = task.classes?.length ?? task.nClasses
  for (let at = 0; at < count; at++) {
    const group = task.classes === null ? at : task.classes[at]
    if (lines.byChainTest[representative[group] >>> 1] === 0) place(group)
  }
  return { netClasses, pinClasses, taps: [...taps.values()], twins, nActive }
}

/** The output value that an input stuck at `stuck` forces on a gate, or −1 where other inputs still matter. */
function forcedOutput(circuit: KernelTask['circuit'], gate: number, stuck: number): number {
  const kind = circuit.kind[gate]
  const inverts = Number(
    kind === GateKind.Not || kind === GateKind.Nand || kind === GateKind.Nor || kind === GateKind.Xnor,
  )
  if (circuit.faninStart[gate + 1] - circuit.faninStart[gate] === 1) return stuck ^ inverts
  if (kind === GateKind.And || kind === GateKind.Nand) return stuck === 0 ? inverts : -1
  if (kind === GateKind.Or || kind === GateKind.Nor) return stuck === 1 ? 1 - inverts : -1
  return -1
}

/** The gate and the index into fanin of each internal net's one sink. */
function onlySinks(circuit: KernelTask['circuit'], order: NetOrder): { gate: Int32Array; pin: Int32Array } {
  const gate = new Int32Array(circuit.nNets).fill(-1)
  const pin = new Int32Array(circuit.nNets).fill(-1)
  for (const net of order.nets) {
    if (!isGate(circuit.kind[net])) continue
    for (let at = circuit.faninStart[net]; at < circuit.faninStart[net + 1]; at++) {
      gate[circuit.fanin[at]] = net
      pin[circuit.fanin[at]] = at
    }
  }
  return { gate, pin }
}

/** The response row of each net's primary output and of each flip-flop's data pin. */
function responseRows(circuit: KernelTask['circuit']): { output: Int32Array; data: Int32Array } {
  const output = new Int32Array(circuit.nNets).fill(-1)
  const data = new Int32Array(circuit.nNets).fill(-1)
  circuit.outputs.forEach((net, row) => (output[net] = row))
  circuit.flipFlops.forEach((net, at) => (data[net] = circuit.outputs.length + at))
  return { output, data }
}
