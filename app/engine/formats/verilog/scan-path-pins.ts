import type { Assembler } from './assemble.ts'
import type { CellAssembler, SequentialRow } from './assemble-cells.ts'
import type { IntList } from '../../circuit/int-list.ts'
import { visitVariables } from '../../circuit/cell-function.ts'

/**
 * Marks the pins that the chain test exercises: scan-in, scan enable, clock, clear and preset pins of scanned flip-flops, and
 * the pins of whatever leads nowhere else: buffers and inverters of the clock tree, of scan enable, of the path from one
 * flip-flop to the next and to the scan output, and outputs of flip-flops and tie cells that only such a path takes.
 */
export function markScanPath(
  shared: Assembler,
  cells: CellAssembler,
  scanned: readonly SequentialRow[],
  scanOutputs: ReadonlySet<number>,
): void {
  if (scanned.length === 0) return
  const { flat, graph } = shared
  const loads = new Uint32Array(graph.nNets)
  const scanLoads = new Uint32Array(graph.nNets)
  /** The cell row that drives a net, plus one. */
  const driver = new Int32Array(graph.nNets)
  for (let row = 0; row < flat.cell.length; row++) {
    const { cell } = cells.planAt(row)
    if (cell.kind === 'physical') continue
    cell.pins.forEach((pin, k) => {
      const net = flat.cellPins.data[flat.cellStart.data[row] + k]
      if (net < 0) return
      if (pin.direction === 'output') driver[shared.rootOf(net)] = row + 1
      else loads[shared.rootOf(net)]++
    })
  }
  for (const list of [flat.gateInputs, flat.boxNets])
    for (const net of list.view()) loads[shared.rootOf(net)]++
  const addLoads = (rows: IntList, stride: number, columns: readonly number[]): void => {
    for (let at = 0; at < rows.length; at += stride) {
      for (const column of columns) loads[shared.rootOf(rows.data[at + column])]++
    }
  }
  addLoads(flat.flipFlops, 5, [0, 2])
  addLoads(flat.threeState, 6, [1, 2])
  for (let at = 0; at < flat.connects.length; at += 4) {
    const from = shared.rootOf(flat.connects.data[at + 1])
    if (from !== shared.rootOf(flat.connects.data[at])) loads[from]++
  }
  for (const list of [flat.outputs, flat.inouts]) for (const net of list.view()) loads[shared.rootOf(net)]++

  const pending: number[] = []
  const addScanLoad = (net: number): void => {
    if (++scanLoads[net] === loads[net]) pending.push(net)
  }
  for (const net of scanOutputs) addScanLoad(net)
  for (const { row, plan, pins } of scanned) {
    for (const pin of scanPins(plan.cell)) if (cells.markByChain(row, pin)) addScanLoad(pins[pin])
  }
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    const row = driver[net] - 1
    if (row < 0) continue
    const { cell, outputPins } = cells.planAt(row)
    const start = flat.cellStart.data[row]
    const netOfPin = (pin: number): number => {
      const at = flat.cellPins.data[start + pin]
      return at < 0 ? -1 : shared.rootOf(at)
    }
    if (cells.isRepeater(row)) {
      for (const pin of cell.pins.keys()) {
        if (cells.markByChain(row, pin) && cell.pins[pin].direction === 'input' && netOfPin(pin) >= 0) {
          addScanLoad(netOfPin(pin))
        }
      }
    } else if (cell.kind === 'flip-flop' || cells.isTie(row)) {
      for (const pin of outputPins) if (netOfPin(pin) === net) cells.markByChain(row, pin)
    }
  }
}

/** The pins of a scanned cell that belong to the scan path. */
function scanPins(cell: SequentialRow['plan']['cell']): Set<number> {
  const pins = new Set<number>()
  if (cell.scan !== null) pins.add(cell.scan.scanIn).add(cell.scan.scanEnable)
  const add = (variable: number): void => {
    if (variable < cell.pins.length) pins.add(variable)
  }
  for (const { clock, clear, preset } of cell.states) {
    for (const each of [clock, clear, preset]) if (each !== null) visitVariables(each, add)
  }
  return pins
}
