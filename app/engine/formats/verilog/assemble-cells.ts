import type { CellFunction, LibraryCell } from '../../circuit/cell-library.ts'
import { buildCellTemplate, placeTemplate, type CellTemplate } from '../../circuit/cell-template.ts'
import { GateKind, LineKind, type LineTable } from '../../circuit/circuit.ts'
import { IntList } from '../../circuit/int-list.ts'
import { isRepeater } from '../../circuit/net-graph.ts'
import type { ScanChain, TestPin, UnusableKind } from '../../circuit/netlist.ts'
import { quoted } from '../../source/finding-list.ts'
import type { Assembler } from './assemble.ts'
import { FlatNet } from './flat-netlist.ts'
import { understandScan, type ScanView } from './understand-scan.ts'

/** What is worked out once for a library cell. */
export type CellPlan = {
  readonly cell: LibraryCell
  /** Pins that carry faults, in the order of the library. */
  readonly faultPins: readonly number[]
  /** Functions of the outputs, and behind them of the three-state enables. */
  readonly outputs: CellTemplate
  /** Output pins in the order of `outputs.results`. */
  readonly outputPins: readonly number[]
  /** Per output: the result that enables it, −1 where it always drives. */
  readonly enableResult: readonly number[]
}

/** A cell instance that stores something. */
export type SequentialRow = {
  readonly row: number
  readonly plan: CellPlan
  /** Nets of the cell's pins; open inputs have a net that nothing drives, open outputs −1. */
  readonly pins: readonly number[]
  /** Per state: the net of its output. */
  readonly states: readonly number[]
}

/** Places library cells into an Assembler's graph and keeps the table of their pins. */
export class CellAssembler {
  computingCells = 0
  flipFlopCount = 0
  readonly sequential: SequentialRow[] = []
  private readonly plans: (CellPlan | undefined)[]
  private readonly counts: Uint32Array
  /** Per cell row: its first pin row. */
  private readonly firstPin = new IntList(1024)
  private readonly pinKind = new IntList(4096)
  private readonly pinNet = new IntList(4096)
  private readonly pinSink = new IntList(4096)
  private readonly pinInput = new IntList(4096)
  private readonly pinByChain = new IntList(4096)
  /** Rows of the pin table from here on are lines of gates that stand beside cells. */
  private cellPinRows = 0
  private readonly clockGateOutputs = new Set<number>()
  private scan: ScanView | null = null
  private readonly shared: Assembler

  constructor(shared: Assembler) {
    this.shared = shared
    this.plans = new Array<CellPlan | undefined>(shared.cells.length)
    this.counts = new Uint32Array(shared.cells.length)
  }

  /** Places the gates of all cells; what is stored stays without a driver until it is known what is scanned. */
  placeCells(): void {
    const { flat } = this.shared
    for (let row = 0; row < flat.cell.length; row++) {
      const index = flat.cell.data[row]
      this.counts[index]++
      const plan = (this.plans[index] ??= planCell(this.shared.cells[index]))
      this.firstPin.push(this.pinKind.length)
      if (plan.cell.kind === 'physical') continue
      this.placeCell(row, plan)
    }
    this.firstPin.push(this.pinKind.length)
  }

  private placeCell(row: number, plan: CellPlan): void {
    const { shared } = this
    const { flat, graph } = shared
    const { cell, outputs } = plan
    const start = flat.cellStart.data[row]
    const pins: number[] = []
    for (let pin = 0; pin < cell.pins.length; pin++) {
      const net = flat.cellPins.data[start + pin]
      if (net >= 0) pins.push(shared.rootOf(net))
      else if (cell.pins[pin].direction === 'output') pins.push(-1)
      else {
        const open = graph.addNet()
        shared.ownNames.set(open, `${flat.cellText(row)}.${cell.pins[pin].name}`)
        pins.push(open)
      }
    }
    const inner = new Int32Array(outputs.nInner).fill(-1)
    const states: number[] = []
    const isStoring = cell.kind === 'flip-flop' || cell.kind === 'latch'
    if (cell.kind === 'combinational') this.computingCells++
    else if (cell.kind === 'flip-flop') this.flipFlopCount++
    if (isStoring) this.addStates(row, cell.states.length, states)
    for (const pin of plan.outputPins) {
      if (pins[pin] < 0 && outputs.useNet[pin] >= 0) pins[pin] = graph.addNet()
    }

    plan.outputPins.forEach((pin, k) => {
      const net = pins[pin]
      if (net < 0 || plan.enableResult[k] >= 0) return
      if (shared.claim(net, flat.cellScope.data[row], flat.cellPlace.data[row]))
        inner[outputs.results[k]] = net
    })
    placeTemplate(graph, outputs, isStoring ? this.withStates(pins, states, outputs) : pins, inner)
    plan.outputPins.forEach((pin, k) => {
      const enable = plan.enableResult[k]
      if (enable < 0) {
        pins[pin] = inner[outputs.results[k]]
        return
      }
      const [data, control] = [inner[outputs.results[k]], inner[outputs.results[enable]]]
      if (pins[pin] < 0) pins[pin] = graph.addNet()
      const place = flat.cellPlace.data[row]
      shared.addThreeState(pins[pin], { data, enable: control, place, scope: flat.cellScope.data[row] })
    })
    for (const pin of plan.faultPins) this.addPinRow(plan, pin, pins, inner)
    if (isStoring) this.sequential.push({ row, plan, pins, states })
    else if (cell.kind !== 'combinational') this.placeUnknown(row, plan, pins)
  }

  /** One net for each state, named after the instance. */
  private addStates(row: number, count: number, states: number[]): void {
    const { graph, ownNames, flat } = this.shared
    for (let state = 0; state < count; state++) {
      const net = graph.addNet()
      ownNames.set(net, count > 1 ? `${flat.cellText(row)}.${state}` : flat.cellText(row))
      states.push(net)
    }
  }

  /** The variables of a storing cell's functions: pins, then each state and its inverse, where a template uses it. */
  withStates(pins: readonly number[], states: readonly number[], template: CellTemplate): number[] {
    const variables = [...pins]
    for (const state of states) {
      const usesInverse = template.useNet[variables.length + 1] >= 0
      variables.push(state, usesInverse ? this.shared.graph.gate(GateKind.Not, state) : -1)
    }
    return variables
  }

  private addPinRow(plan: CellPlan, pin: number, pins: readonly number[], inner: Int32Array): void {
    const { useNet, useInput } = plan.outputs
    const isOutput = plan.cell.pins[pin].direction === 'output'
    if (isOutput) this.pushPin(LineKind.Stem, pins[pin], -1, 0)
    else if (useNet[pin] < 0) this.pushPin(LineKind.Outside, pins[pin], -1, 0)
    else if (useInput[pin] < 0) this.pushPin(LineKind.Stem, inner[useNet[pin]], -1, 0)
    else this.pushPin(LineKind.GateInput, pins[pin], inner[useNet[pin]], useInput[pin])
  }

  private pushPin(kind: LineKind, net: number, sink: number, input: number): void {
    this.pinKind.push(kind)
    this.pinNet.push(net < 0 ? FlatNet.Unknown : net)
    this.pinSink.push(sink)
    this.pinInput.push(input)
    this.pinByChain.push(0)
  }

  /** Adds the lines of gates and flip-flops that stand beside cells, as a netlist of gates names them. */
  addWrittenGates(): void {
    const { flat, graph } = this.shared
    this.cellPinRows = this.pinKind.length
    for (const written of flat.gateNet.view()) {
      const net = this.shared.rootOf(written)
      for (let k = 0; k < graph.count(net); k++) this.pushPin(LineKind.GateInput, graph.input(net, k), net, k)
      this.pushPin(LineKind.Stem, net, -1, 0)
    }
    for (let at = 0; at < flat.flipFlops.length; at += 5) {
      const net = this.shared.rootOf(flat.flipFlops.data[at + 1])
      const isScanned = graph.kind.data[net] === GateKind.FlipFlop
      const data = this.shared.rootOf(flat.flipFlops.data[at + 2])
      this.pushPin(isScanned ? LineKind.FlipFlopData : LineKind.Outside, data, net, 0)
      this.pushPin(LineKind.Stem, net, -1, 0)
    }
  }

  /** Moves the faults of a cell's pin to where its value is used after all. */
  movePin(row: number, pin: number, kind: LineKind, net: number, sink: number, input: number): void {
    const at = this.pinRow(row, pin)
    if (at < 0) return
    this.pinKind.data[at] = kind
    this.pinNet.data[at] = net
    this.pinSink.data[at] = sink
    this.pinInput.data[at] = input
  }

  /** Marks a cell's pin as part of the scan path; true unless it was already. */
  markByChain(row: number, pin: number): boolean {
    const at = this.pinRow(row, pin)
    if (at < 0 || this.pinByChain.data[at] === 1) return false
    this.pinByChain.data[at] = 1
    return true
  }

  /** The plan of the cell at a row. */
  planAt(row: number): CellPlan {
    const plan = this.plans[this.shared.flat.cell.data[row]]
    if (plan === undefined) throw new RangeError(`cell ${row} has not been placed`)
    return plan
  }

  private pinRow(row: number, pin: number): number {
    const place = this.planAt(row).faultPins.indexOf(pin)
    return place < 0 ? -1 : this.firstPin.data[row] + place
  }

  /** A cell whose outputs are not computed: they carry X, and its inputs are not observed. */
  private placeUnknown(row: number, plan: CellPlan, pins: readonly number[]): void {
    const { shared } = this
    const kind: UnusableKind = plan.cell.kind === 'clock gate' ? 'clock gate' : 'black box'
    const source = shared.unusable.add(kind, shared.flat.cellText(row))
    plan.cell.pins.forEach((pin, k) => {
      if (pin.isBusHold || pin.direction === 'internal') return
      const net = pins[k]
      if (pin.direction === 'input') source.unobserved.push(net)
      else if (pin.function !== null || net < 0) return
      else if (pin.direction === 'inout') {
        shared.addThreeState(net, {
          data: FlatNet.Unknown,
          enable: FlatNet.Unknown,
          place: shared.flat.cellPlace.data[row],
          scope: shared.flat.cellScope.data[row],
        })
      } else if (shared.claim(net, shared.flat.cellScope.data[row], shared.flat.cellPlace.data[row])) {
        shared.graph.drive(net, GateKind.Unknown)
        source.sources.push(net)
        if (kind === 'clock gate') this.clockGateOutputs.add(net)
      }
    })
  }

  /** Decides what is scanned and gives every stored bit its driver. */
  placeSequential(inputs: readonly number[]): void {
    if (this.sequential.length === 0) {
      this.scan = null
      return
    }
    this.scan = understandScan(this.shared, this, inputs)
  }

  chains(): readonly ScanChain[] {
    return this.scan?.chains ?? []
  }

  testPins(): readonly TestPin[] {
    return this.scan?.testPins ?? this.shared.options.testPins
  }

  cellsUsed(): { cell: string; count: number }[] {
    return this.shared.cells
      .map((cell, index) => ({ cell: cell.name, count: this.counts[index] }))
      .filter((row) => row.count > 0)
      .sort((a, b) => b.count - a.count)
  }

  markPinNets(used: Uint8Array): void {
    for (const net of this.pinNet.view()) used[net] = 1
    for (const net of this.pinSink.view()) if (net >= 0) used[net] = 1
  }

  /** The table of cell pins, by the circuit's nets. A pin on a net of X, or on one that the circuit lacks, is outside. */
  pinTable(netOf: Int32Array): LineTable {
    const { graph, flat } = this.shared
    const n = this.pinKind.length
    const kind = new Uint8Array(n)
    const net = new Uint32Array(n)
    const sink = new Int32Array(n).fill(-1)
    const pin = new Uint32Array(n)
    const byChainTest = Uint8Array.from(this.pinByChain.view())
    for (let at = 0; at < n; at++) {
      const graphNet = this.pinNet.data[at]
      const graphSink = this.pinSink.data[at]
      net[at] = netOf[graphNet]
      const isDead = this.pinKind.data[at] === LineKind.Stem && graph.kind.data[graphNet] === GateKind.Unknown
      kind[at] = isDead || netOf[graphNet] < 0 ? LineKind.Outside : this.pinKind.data[at]
      if (graphSink < 0 || kind[at] === LineKind.Outside) continue
      sink[at] = netOf[graphSink]
      pin[at] = this.pinInput.data[at]
    }
    const firstPin = this.firstPin.data.slice(0, this.firstPin.length)
    const faultPins = (row: number): readonly number[] => this.planAt(row).faultPins
    const lineName = (row: number): string => {
      const name = this.shared.netName(this.pinNet.data[row])
      const sinkNet = this.pinSink.data[row]
      return sinkNet < 0 ? name : `${name}>${this.shared.netName(sinkNet)}.${this.pinInput.data[row]}`
    }
    const nameOf = (row: number): string => {
      if (row >= this.cellPinRows) return lineName(row)
      let low = 0
      let high = firstPin.length - 1
      while (low < high) {
        const middle = (low + high + 1) >> 1
        if (firstPin[middle] <= row) low = middle
        else high = middle - 1
      }
      const cell = this.planAt(low).cell
      return `${flat.cellText(low)}.${cell.pins[faultPins(low)[row - firstPin[low]]].name}`
    }
    return { n, kind, net, sink, pin, byChainTest, nameOf }
  }

  /** True where the cell only passes its one input on. */
  isRepeater(row: number): boolean {
    return isRepeater(this.onlyGate(row))
  }

  /** True where the cell only gives a constant. */
  isTie(row: number): boolean {
    const kind = this.onlyGate(row)
    return kind === GateKind.Const0 || kind === GateKind.Const1
  }

  /** The kind of a combinational cell's gate where it has just one, of at most one input; else −1. */
  private onlyGate(row: number): number {
    const { outputs, cell } = this.planAt(row)
    const isSingle = cell.kind === 'combinational' && outputs.nInner === 1 && outputs.gates[2] <= 1
    return isSingle ? outputs.gates[0] : -1
  }

  isClockGateOutput(net: number): boolean {
    return this.clockGateOutputs.has(net)
  }

  /** Warns about one cell instance, at its place. */
  warnAt(row: number, message: string): void {
    const { flat } = this.shared
    const name = quoted(flat.cellText(row))
    this.shared.warn(
      'not-scanned',
      `${name} ${message}`,
      null,
      flat.cellScope.data[row],
      flat.cellPlace.data[row],
    )
  }
}

function planCell(cell: LibraryCell): CellPlan {
  const outputPins: number[] = []
  const functions: CellFunction[] = []
  const enables: CellFunction[] = []
  cell.pins.forEach((pin, index) => {
    if (pin.function === null || pin.direction === 'internal' || pin.direction === 'input') return
    outputPins.push(index)
    functions.push(pin.function)
  })
  const enableResult = outputPins.map((pin) => {
    const { threeState } = cell.pins[pin]
    if (threeState === null) return -1
    enables.push({ kind: 'not', of: threeState })
    return functions.length + enables.length - 1
  })
  const faultPins = [...cell.pins.keys()].filter((pin) => {
    const { direction, isBusHold } = cell.pins[pin]
    return direction !== 'internal' && !isBusHold
  })
  const outputs = buildCellTemplate([...functions, ...enables], cell.pins.length + 2 * cell.states.length)
  return { cell, faultPins: cell.kind === 'physical' ? [] : faultPins, outputs, outputPins, enableResult }
}
