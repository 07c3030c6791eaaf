import { GateKind, LineKind, type Circuit, type LineTable } from '../circuit/circuit.ts'
import { isGate } from '../circuit/circuit-builder.ts'
import type { FaultList } from './fault-list.ts'
import { listLines, type NetLines } from './list-lines.ts'

/**
 * Builds the single stuck-at faults of a circuit on its stated base and their equivalence classes.
 * Equivalence by the rules on a gate: the controlling value at any input of AND, NAND, OR, NOR equals the output value
 * that it forces; buffers, inverters and one-input gates carry both values; nothing crosses a flip-flop; a net with one
 * destination has one line. (Common practice; the published collapsed counts of the ISCAS circuits follow from it.)
 */
export function buildFaultList(circuit: Circuit): FaultList {
  const netLines = listLines(circuit)
  const root = equivalenceRoots(circuit, netLines)
  const lines = circuit.pins ?? netLines.table
  const nFaults = 2 * lines.n
  const classOf = new Uint32Array(nFaults)
  const classOfRoot = new Int32Array(2 * netLines.table.n).fill(-1)
  const representative = new Uint32Array(nFaults)
  const classSize = new Uint32Array(nFaults)
  let nClasses = 0
  for (let row = 0; row < lines.n; row++) {
    const line = circuit.pins === null ? row : lineOfPin(circuit.pins, row, circuit, netLines)
    for (let stuck = 0; stuck < 2; stuck++) {
      const fault = 2 * row + stuck
      let group = line < 0 ? -1 : classOfRoot[root[2 * line + stuck]]
      if (group < 0) {
        group = nClasses++
        representative[group] = fault
        if (line >= 0) classOfRoot[root[2 * line + stuck]] = group
      } else if (lines.byChainTest[representative[group] >>> 1] && !lines.byChainTest[row]) {
        representative[group] = fault
      }
      classOf[fault] = group
      classSize[group]++
    }
  }
  return {
    base: circuit.pins === null ? 'lines' : 'cell pins',
    lines,
    nFaults,
    nClasses,
    classOf,
    representative: representative.slice(0, nClasses),
    classSize: classSize.slice(0, nClasses),
  }
}

/** The netlist line that a cell pin lies on, or −1 where no model reaches the pin. */
function lineOfPin(pins: LineTable, row: number, circuit: Circuit, lines: NetLines): number {
  const net = pins.net[row]
  switch (pins.kind[row]) {
    case LineKind.Stem:
      return lines.stemOf[net]
    case LineKind.GateInput:
    case LineKind.FlipFlopData:
      return lines.lineOfFanin[circuit.faninStart[pins.sink[row]] + pins.pin[row]]
    case LineKind.OutputTap:
      return lines.tapOf[net]
    default:
      return -1
  }
}

/** Union-find over all 2 × lines faults; `root[fault]` names the class by its smallest fault. */
function equivalenceRoots(circuit: Circuit, lines: NetLines): Uint32Array {
  const parent = new Uint32Array(2 * lines.table.n)
  for (let fault = 0; fault < parent.length; fault++) parent[fault] = fault
  const find = (fault: number): number => {
    while (parent[fault] !== fault) {
      parent[fault] = parent[parent[fault]]
      fault = parent[fault]
    }
    return fault
  }
  const unite = (a: number, b: number): void => {
    const rootA = find(a)
    const rootB = find(b)
    if (rootA < rootB) parent[rootB] = rootA
    else parent[rootA] = rootB
  }
  const { kind, faninStart } = circuit
  for (let net = 0; net < circuit.nNets; net++) {
    if (!isGate(kind[net])) continue
    const first = faninStart[net]
    const end = faninStart[net + 1]
    const output = 2 * lines.stemOf[net]
    if (end - first === 1) {
      const inverts = isInverting(kind[net]) ? 1 : 0
      const input = 2 * lines.lineOfFanin[first]
      unite(input, output + inverts)
      unite(input + 1, output + 1 - inverts)
      continue
    }
    const controlling = controllingValue(kind[net])
    if (controlling < 0) continue
    const forced = isInverting(kind[net]) ? 1 - controlling : controlling
    for (let at = first; at < end; at++) unite(2 * lines.lineOfFanin[at] + controlling, output + forced)
  }
  for (let fault = 0; fault < parent.length; fault++) parent[fault] = find(fault)
  return parent
}

function isInverting(kind: number): boolean {
  return kind === GateKind.Not || kind === GateKind.Nand || kind === GateKind.Nor || kind === GateKind.Xnor
}

/** The input value that alone decides the output, or −1 where there is none. */
function controllingValue(kind: number): 0 | 1 | -1 {
  if (kind === GateKind.And || kind === GateKind.Nand) return 0
  if (kind === GateKind.Or || kind === GateKind.Nor) return 1
  return -1
}
