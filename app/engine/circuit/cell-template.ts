import { visitVariables } from './cell-function.ts'
import type { CellFunction } from './cell-library.ts'
import { GateKind } from './circuit.ts'
import { IntList } from './int-list.ts'
import type { NetGraph } from './net-graph.ts'

/**
 * Functions of a cell, turned into gates once for all of its instances. A reference below nVariables is a variable of the
 * functions; from there on it is an inner net. Gates stand in `gates` as: kind, inner net, count, references.
 */
export type CellTemplate = {
  readonly nVariables: number
  readonly nInner: number
  readonly gates: Int32Array
  /** Per function: the inner net that it drives. */
  readonly results: Int32Array
  /** Per variable: the inner net that carries the pin alone, the gate input that it feeds, or neither (−1). */
  readonly useNet: Int32Array
  /** The number of that gate's input; −1 where `useNet` is a net that carries the pin alone. */
  readonly useInput: Int32Array
}

/**
 * Turns functions into gates as they are written, without minimising: an inverted AND is a NAND gate and AND in AND is one
 * gate, which changes no three-valued result; everything else stays, so that `A S' + B S` gives X for equal data under an
 * unknown select. A variable that is used more than once gets a buffer, on whose output the pin's faults sit.
 */
export function buildCellTemplate(functions: readonly CellFunction[], nVariables: number): CellTemplate {
  const uses = new Uint32Array(nVariables)
  const simple = functions.map(simplified)
  for (const each of simple) visitVariables(each, (variable) => uses[variable]++)
  const gates = new IntList()
  const useNet = new Int32Array(nVariables).fill(-1)
  const useInput = new Int32Array(nVariables).fill(-1)
  let nInner = 0
  for (let variable = 0; variable < nVariables; variable++) {
    if (uses[variable] < 2) continue
    useNet[variable] = nInner
    for (const value of [GateKind.Buffer, nInner++, 1, variable]) gates.push(value)
  }
  const reference = (of: CellFunction, sink: number, input: number): number => {
    if (of.kind !== 'variable') return nVariables + emit(of)
    if (uses[of.index] > 1) return nVariables + useNet[of.index]
    useNet[of.index] = sink
    useInput[of.index] = input
    return of.index
  }
  const emit = (of: CellFunction): number => {
    const net = nInner++
    const { kind, operands } = gateOf(of)
    const references = operands.map((operand, input) => reference(operand, net, input))
    gates.push(kind)
    gates.push(net)
    gates.push(references.length)
    for (const value of references) gates.push(value)
    return net
  }
  const results = Int32Array.from(simple, emit)
  return { nVariables, nInner, gates: gates.data.slice(0, gates.length), results, useNet, useInput }
}

/** Adds an instance's gates to the graph; `inner[k]` is the net to take for inner net k, or −1 for a new one, set here. */
export function placeTemplate(
  graph: NetGraph,
  template: CellTemplate,
  variables: Int32Array | readonly number[],
  inner: Int32Array,
): void {
  const { gates, nVariables, nInner } = template
  for (let k = 0; k < nInner; k++) if (inner[k] < 0) inner[k] = graph.addNet()
  let at = 0
  while (at < gates.length) {
    const net = inner[gates[at + 1]]
    graph.open(net, gates[at] as GateKind)
    const end = at + 3 + gates[at + 2]
    for (at += 3; at < end; at++) {
      const reference = gates[at]
      graph.addInput(net, reference < nVariables ? variables[reference] : inner[reference - nVariables])
    }
  }
}

/** The same function without double inversions, and with AND in AND, OR in OR, XOR in XOR as one operator. */
function simplified(of: CellFunction): CellFunction {
  if (of.kind === 'variable' || of.kind === 'constant') return of
  if (of.kind === 'not') {
    const inner = simplified(of.of)
    return inner.kind === 'not' ? inner.of : { kind: 'not', of: inner }
  }
  const operands = of.of.map(simplified).flatMap((inner) => (inner.kind === of.kind ? inner.of : [inner]))
  return { kind: of.kind, of: operands }
}

function gateOf(of: CellFunction): { kind: GateKind; operands: readonly CellFunction[] } {
  switch (of.kind) {
    case 'variable':
      return { kind: GateKind.Buffer, operands: [of] }
    case 'constant':
      return {
        kind: of.value === 0 ? GateKind.Const0 : of.value === 1 ? GateKind.Const1 : GateKind.Unknown,
        operands: [],
      }
    case 'not': {
      const inner = of.of
      if (inner.kind === 'and') return { kind: GateKind.Nand, operands: inner.of }
      if (inner.kind === 'or') return { kind: GateKind.Nor, operands: inner.of }
      if (inner.kind === 'xor') return { kind: GateKind.Xnor, operands: inner.of }
      return { kind: GateKind.Not, operands: [inner] }
    }
    case 'and':
      return { kind: GateKind.And, operands: of.of }
    case 'or':
      return { kind: GateKind.Or, operands: of.of }
    case 'xor':
      return { kind: GateKind.Xor, operands: of.of }
  }
}
