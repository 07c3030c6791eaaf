import { traceBack, type Origin } from './scan-constants.ts'
import type { NetGraph } from './net-graph.ts'

/** A flip-flop that can shift, by its nets in a graph. */
export type ShiftCell = {
  /** The net that carries what it stores. */
  readonly state: number
  readonly scanIn: number
  /** True where it stores the inverse of what arrives at its scan-in pin. */
  readonly invertsScanIn: boolean
}

/** A chain through ShiftCells, by their numbers. */
export type TracedChain = {
  /** The net of the primary input that feeds the chain. */
  readonly scanIn: number
  /** The net of the primary output that the chain ends at. */
  readonly scanOut: number
  /** In shift order, the first next to scan-in. */
  readonly cells: readonly number[]
  readonly loadInverted: readonly boolean[]
  readonly unloadInverted: readonly boolean[]
}

/** Why shift cells are on no chain. */
export type ChainBreak = {
  readonly reason: 'no-scan-in' | 'no-scan-out' | 'ring' | 'branch'
  /** The cell at which the trace ended, and all that it leaves without a chain. */
  readonly cell: number
  readonly cells: readonly number[]
  /** Where the scan-in pin's value comes from, for 'no-scan-in'. */
  readonly origin: number
}

/**
 * Traces scan chains from primary inputs to primary outputs while the given constants (scan enable in shift) hold, through
 * buffers, inverters and gates that the constants open. A cell whose value two cells shift in, or which no primary
 * output shows, ends its chain without a scan-out: such cells are no chain.
 */
export function traceScanChains(
  graph: NetGraph,
  constants: Int8Array,
  cells: readonly ShiftCell[],
  inputs: ReadonlySet<number>,
  outputs: readonly number[],
): { readonly chains: readonly TracedChain[]; readonly breaks: readonly ChainBreak[] } {
  const cellOfState = new Map(cells.map((cell, index) => [cell.state, index]))
  const origins = cells.map((cell) => traceBack(graph, constants, cell.scanIn))
  const next = new Int32Array(cells.length).fill(NONE)
  const heads: number[] = []
  const breaks: ChainBreak[] = []
  origins.forEach((origin, cell) => {
    const before = cellOfState.get(origin.net)
    if (before !== undefined) next[before] = next[before] === NONE ? cell : MANY
    else if (inputs.has(origin.net)) heads.push(cell)
  })
  const ends = new Map<number, { net: number; origin: Origin }>()
  for (const net of outputs) {
    const origin = traceBack(graph, constants, net)
    const cell = cellOfState.get(origin.net)
    if (cell !== undefined && next[cell] === NONE && !ends.has(cell)) ends.set(cell, { net, origin })
  }
  const isPlaced = new Uint8Array(cells.length)
  const walk = (head: number): number[] => {
    const path: number[] = []
    for (let cell = head; cell >= 0 && isPlaced[cell] === 0; cell = next[cell]) {
      isPlaced[cell] = 1
      path.push(cell)
    }
    return path
  }
  const chains: TracedChain[] = []
  for (const head of heads) {
    const path = walk(head)
    const last = path[path.length - 1]
    const end = ends.get(last)
    if (end === undefined) {
      const reason = next[last] === MANY ? 'branch' : 'no-scan-out'
      breaks.push({ reason, cell: last, cells: path, origin: origins[head].net })
      continue
    }
    chains.push({
      scanIn: origins[head].net,
      scanOut: end.net,
      cells: path,
      ...inversions(path, cells, origins, end.origin.inverted),
    })
  }
  for (let cell = 0; cell < cells.length; cell++) {
    if (isPlaced[cell] === 1 || cellOfState.has(origins[cell].net)) continue
    breaks.push({ reason: 'no-scan-in', cell, cells: walk(cell), origin: origins[cell].net })
  }
  for (let cell = 0; cell < cells.length; cell++) {
    if (isPlaced[cell] === 1) continue
    const before = cellOfState.get(origins[cell].net)
    const reason = before !== undefined && next[before] === MANY ? 'branch' : 'ring'
    breaks.push({ reason, cell, cells: walk(cell), origin: origins[cell].net })
  }
  return { chains, breaks }
}

const NONE = -1
const MANY = -2

function inversions(
  path: readonly number[],
  cells: readonly ShiftCell[],
  origins: readonly Origin[],
  lastInverted: boolean,
): { loadInverted: boolean[]; unloadInverted: boolean[] } {
  const step = path.map((cell) => origins[cell].inverted !== cells[cell].invertsScanIn)
  const loadInverted: boolean[] = []
  let parity = false
  for (const inverts of step) loadInverted.push((parity = parity !== inverts))
  const unloadInverted = new Array<boolean>(path.length)
  parity = lastInverted
  for (let at = path.length - 1; at >= 0; at--) {
    unloadInverted[at] = parity
    parity = parity !== step[at]
  }
  return { loadInverted, unloadInverted }
}
