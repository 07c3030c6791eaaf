import type { CellFunction, CellState } from '../../circuit/cell-library.ts'
import { evaluateFunction, shiftInversion, visitVariables } from '../../circuit/cell-function.ts'
import { buildCellTemplate, placeTemplate } from '../../circuit/cell-template.ts'
import { GateKind, LineKind } from '../../circuit/circuit.ts'
import type { FlipFlopClock, ScanChain, TestPin } from '../../circuit/netlist.ts'
import { traceScanChains, type ChainBreak, type ShiftCell } from '../../circuit/scan-chains.ts'
import { NOT_CONSTANT, spreadConstants, traceBack } from '../../circuit/scan-constants.ts'
import { quoted } from '../../source/finding-list.ts'
import type { Assembler } from './assemble.ts'
import type { CellAssembler, SequentialRow } from './assemble-cells.ts'
import { FlatNet } from './flat-netlist.ts'
import { markScanPath } from './scan-path-pins.ts'

export type ScanView = { readonly chains: readonly ScanChain[]; readonly testPins: readonly TestPin[] }

/**
 * Decides which stored bits of library cells are scanned, gives each its driver, and returns the chains and the pins that
 * hold one value in test.
 *
 * Scanned is a flip-flop on a chain that was traced from an input to an output with scan enable in shift, or every
 * flip-flop where the caller assumes so. Its clear and preset act as written, on its output and on what it takes. What it
 * takes is X where its clock is not an input's (a gated clock may not arrive) and where it takes its data at the other
 * edge than most flip-flops of that clock. All other flip-flops and all latches are sources of X.
 */
export function understandScan(shared: Assembler, cells: CellAssembler, inputs: readonly number[]): ScanView {
  return new ScanAssembler(shared, cells, inputs).run()
}

class ScanAssembler {
  private readonly shared: Assembler
  private readonly cells: CellAssembler
  private readonly isInput: Set<number>
  private readonly pins = new Map<string, TestPin>()
  private readonly netByName = new Map<string, number>()

  constructor(shared: Assembler, cells: CellAssembler, inputs: readonly number[]) {
    this.shared = shared
    this.cells = cells
    this.isInput = new Set(inputs)
    for (const net of inputs) this.netByName.set(shared.netName(net), net)
  }

  run(): ScanView {
    const { graph, options } = this.shared
    const { sequential } = this.cells
    // While chains are traced a state is a source like an input.
    for (const { states } of sequential) for (const state of states) graph.drive(state, GateKind.Unknown)
    for (const pin of options.testPins) {
      if (this.netByName.has(pin.name)) this.pins.set(pin.name, pin)
      else
        this.shared.warn(
          'not-scanned',
          `no input is called ${quoted(pin.name)}, which was to be held in test`,
        )
    }
    const fixed = this.heldPins('fixed')
    const shift = this.shiftPins(fixed)
    const traced = this.traceChains(new Map([...fixed, ...shift]))
    const capture = new Map([
      ...fixed,
      ...Array.from(shift, ([net, to]) => [net, (1 - to) as 0 | 1] as const),
    ])
    const constants = spreadConstants(graph, capture)

    const onChain = new Set(traced.flatMap((chain) => chain.rows.map(({ row }) => row)))
    const isScanned = ({ row, plan }: SequentialRow): boolean =>
      plan.cell.kind === 'flip-flop' && (onChain.has(row) || options.assumeScanned)
    const scanned = sequential.filter(isScanned)
    const clocks = this.findClocks(scanned, constants)
    const firstFlipFlop = new Map<number, number>()
    for (const row of sequential) {
      const found = clocks.get(row.row)
      if (found === undefined) {
        this.placeUnscanned(row)
        continue
      }
      firstFlipFlop.set(row.row, this.shared.flipFlops.length)
      this.placeScanned(row, found, constants)
    }
    this.proposeResets(scanned, constants)
    this.warnUnscanned(sequential.length - scanned.length, scanned.length - onChain.size)
    markScanPath(this.shared, this.cells, scanned, new Set(traced.map((chain) => chain.scanOut)))
    return {
      chains: this.describeAll(traced, firstFlipFlop),
      testPins: [...this.pins.values()],
    }
  }

  private heldPins(role: TestPin['role']): Map<number, 0 | 1> {
    const held = new Map<number, 0 | 1>()
    for (const pin of this.pins.values()) {
      const net = this.netByName.get(pin.name)
      if (net !== undefined && pin.role === role && pin.value !== 'X') held.set(net, pin.value)
    }
    return held
  }

  /** The inputs that put flip-flops into shift, with the value that does. */
  private shiftPins(fixed: ReadonlyMap<number, 0 | 1>): Map<number, 0 | 1> {
    const shift = new Map<number, 0 | 1>()
    for (const [net, capture] of this.heldPins('scan-enable')) shift.set(net, (1 - capture) as 0 | 1)
    const shifters = this.cells.sequential.filter(({ plan }) => plan.cell.scan !== null)
    if (shifters.length === 0) return shift
    const constants = spreadConstants(this.shared.graph, fixed)
    for (const { plan, pins } of shifters) {
      const { scan } = plan.cell
      if (scan === null) continue
      const origin = traceBack(this.shared.graph, constants, pins[scan.scanEnable])
      if (!this.isInput.has(origin.net) || shift.has(origin.net)) continue
      const value = (scan.shiftValue ^ (origin.inverted ? 1 : 0)) as 0 | 1
      shift.set(origin.net, value)
      this.propose(origin.net, 'scan-enable', (1 - value) as 0 | 1)
    }
    return shift
  }

  private traceChains(held: ReadonlyMap<number, 0 | 1>): TracedRows[] {
    const { graph, flat } = this.shared
    const rows: SequentialRow[] = []
    const shiftCells: ShiftCell[] = []
    const constants = spreadConstants(graph, held)
    for (const row of this.cells.sequential) {
      const { scan, states } = row.plan.cell
      if (scan === null || states.length !== 1) continue
      const enable = constants[row.pins[scan.scanEnable]]
      const [{ next }] = states
      const invertsScanIn = shiftInversion(next, scan.scanEnable, scan.shiftValue, scan.scanIn)
      if (enable !== scan.shiftValue || invertsScanIn === null) continue
      if (!this.isClockedInShift(row, constants)) continue
      rows.push(row)
      shiftCells.push({ state: row.states[0], scanIn: row.pins[scan.scanIn], invertsScanIn })
    }
    const outputs = Array.from(flat.outputs.view(), (net) => this.shared.rootOf(net))
    const { chains, breaks } = traceScanChains(graph, constants, shiftCells, this.isInput, outputs)
    for (const each of breaks) this.warnBreak(each, rows)
    return chains.map((chain) => {
      this.propose(chain.scanIn, 'scan-in', 'X')
      return {
        scanIn: chain.scanIn,
        scanOut: chain.scanOut,
        rows: chain.cells.map((cell) => rows[cell]),
        loadInverted: chain.loadInverted,
        unloadInverted: chain.unloadInverted,
      }
    })
  }

  /** A flip-flop shifts if its clock comes from an input, or through a clock gate, which is taken to be open in shift. */
  private isClockedInShift(row: SequentialRow, constants: Int8Array): boolean {
    const clock = this.traceClock(row, row.plan.cell.states[0], constants)
    if (clock.port >= 0 || this.cells.isClockGateOutput(clock.origin)) return true
    this.cells.warnAt(row.row, 'does not shift: its clock comes from logic, not from an input')
    return false
  }

  private warnBreak(found: ChainBreak, rows: readonly SequentialRow[]): void {
    const { row } = rows[found.cell]
    const count = found.cells.length
    const left = `${count} scan flip-flop${count === 1 ? ' is' : 's are'} on no chain`
    const why = {
      'no-scan-in': `its scan-in comes from ${this.netText(found.origin)}, which is neither an input nor a flip-flop's output`,
      'no-scan-out': 'no output shows it in shift',
      ring: 'its chain runs in a ring',
      branch: 'two flip-flops shift in its value, or it follows one where they do',
    }[found.reason]
    this.cells.warnAt(row, `ends a scan chain: ${why}; ${left}`)
  }

  private netText(net: number): string {
    const name = this.shared.netName(net)
    return name === '' ? 'logic' : `net ${quoted(name)}`
  }

  /** The clock of each scanned flip-flop, and whether it takes its data in a capture at all. */
  private findClocks(scanned: readonly SequentialRow[], constants: Int8Array): Map<number, FoundClock[]> {
    const found = new Map<number, FoundClock[]>()
    const edges = new Map<number, { rising: number; falling: number }>()
    for (const row of scanned) {
      const clocks = row.plan.cell.states.map((state) => this.traceClock(row, state, constants))
      found.set(row.row, clocks)
      for (const { port, isFalling } of clocks) {
        const count = edges.get(port) ?? { rising: 0, falling: 0 }
        if (isFalling) count.falling++
        else count.rising++
        edges.set(port, count)
      }
    }
    for (const clocks of found.values()) {
      for (const clock of clocks) {
        const { rising, falling } = edges.get(clock.port) ?? { rising: 0, falling: 0 }
        const usualFalling = falling > rising
        clock.isCertain = clock.port >= 0 && clock.isFalling === usualFalling
        if (clock.port >= 0) this.propose(clock.port, 'clock', usualFalling ? 1 : 0)
      }
    }
    return found
  }

  private traceClock(row: SequentialRow, state: CellState, constants: Int8Array): FoundClock {
    const { clock } = state
    const inner = clock.kind === 'not' ? clock.of : clock
    if (inner.kind !== 'variable' || inner.index >= row.pins.length) {
      return { port: -1, origin: -1, isFalling: false, isCertain: false }
    }
    const origin = traceBack(this.shared.graph, constants, row.pins[inner.index])
    const isFalling = (clock.kind === 'not') !== origin.inverted
    const port = this.isInput.has(origin.net) ? origin.net : -1
    return { port, origin: origin.net, isFalling, isCertain: false }
  }

  private placeUnscanned({ row, plan, pins, states }: SequentialRow): void {
    const { unusable, flat } = this.shared
    const kind = plan.cell.kind === 'latch' ? 'latch' : 'unscanned flip-flop'
    const source = unusable.add(kind, flat.cellText(row))
    source.sources.push(...states)
    // What it stores is lost here; clock, clear and preset would not be observed if it were scanned either.
    const { scan } = plan.cell
    const onScanPath = new Set(scan === null ? [] : [scan.scanIn, scan.scanEnable])
    for (const state of plan.cell.states) {
      visitVariables(state.next, (index) => {
        if (index < pins.length && !onScanPath.has(index)) source.unobserved.push(pins[index])
      })
    }
  }

  /** Gives the states of a scanned flip-flop their drivers, and its pins their places. */
  private placeScanned(row: SequentialRow, clocks: readonly FoundClock[], constants: Int8Array): void {
    const { graph, unusable, flat, flipFlops } = this.shared
    const { plan, pins, states } = row
    plan.cell.states.forEach((state, index) => {
      const clock = clocks[index]
      const clear = this.needed(state.clear, pins, constants)
      const preset = this.needed(state.preset, pins, constants)
      const wanted = [state.next, clear, preset].filter((each) => each !== null)
      const template = buildCellTemplate(wanted, plan.cell.pins.length + 2 * states.length)
      const inner = new Int32Array(template.nInner).fill(-1)
      const output = states[index]
      const stored = clear === null && preset === null ? output : graph.addNet()
      placeTemplate(graph, template, this.cells.withStates(pins, states, template), inner)
      for (const pin of plan.faultPins) {
        if (plan.cell.pins[pin].direction === 'output' || template.useNet[pin] < 0) continue
        const net = inner[template.useNet[pin]]
        if (template.useInput[pin] < 0) this.cells.movePin(row.row, pin, LineKind.Stem, net, -1, 0)
        else this.cells.movePin(row.row, pin, LineKind.GateInput, pins[pin], net, template.useInput[pin])
      }
      const clearNet = clear === null ? -1 : inner[template.results[1]]
      const presetNet = preset === null ? -1 : inner[template.results[clear === null ? 1 : 2]]
      let data = this.forced(inner[template.results[0]], clearNet, presetNet, state.both)
      if (stored !== output) {
        this.shared.ownNames.set(stored, this.shared.ownNames.get(output) ?? '')
        this.shared.ownNames.delete(output)
        graph.drive(output, GateKind.Buffer, this.forced(stored, clearNet, presetNet, state.both))
      }
      if (!clock.isCertain) {
        const source = unusable.add('uncertain capture', flat.cellText(row.row))
        source.unobserved.push(data)
        data = graph.gate(GateKind.Unknown)
        source.sources.push(data)
      }
      graph.drive(stored, GateKind.FlipFlop, data)
      const port = clock.port < 0 ? null : this.shared.netName(clock.port)
      const flipFlopClock: FlipFlopClock = { port, edge: clock.isFalling ? 'falling' : 'rising' }
      flipFlops.push({ net: stored, clock: flipFlopClock })
    })
  }

  /** The clear or preset where it may act; null where constants hold it off. */
  private needed(
    of: CellFunction | null,
    pins: readonly number[],
    constants: Int8Array,
  ): CellFunction | null {
    if (of === null) return null
    return evaluateFunction(of, (index) =>
      index < pins.length ? (constants[pins[index]] ?? NOT_CONSTANT) : NOT_CONSTANT,
    ) === 0
      ? null
      : of
  }

  /** A value as clear and preset leave it. */
  private forced(value: number, clear: number, preset: number, both: CellState['both']): number {
    const { graph } = this.shared
    if (clear < 0 && preset < 0) return value
    if (clear < 0) return graph.gate(GateKind.Or, value, preset)
    const notClear = graph.gate(GateKind.Not, clear)
    if (preset < 0) return graph.gate(GateKind.And, value, notClear)
    if (both[0] === 1 && both[1] === 0) {
      return graph.gate(GateKind.Or, graph.gate(GateKind.And, value, notClear), preset)
    }
    const cleared = graph.gate(GateKind.And, graph.gate(GateKind.Or, value, preset), notClear)
    if (both[0] === 0 && both[1] === 1) return cleared
    return graph.gate(GateKind.Or, cleared, graph.gate(GateKind.And, clear, preset, FlatNet.Unknown))
  }

  private proposeResets(scanned: readonly SequentialRow[], constants: Int8Array): void {
    for (const { plan, pins } of scanned) {
      for (const state of plan.cell.states) {
        for (const active of [state.clear, state.preset]) {
          const inner = active?.kind === 'not' ? active.of : active
          if (!inner || inner.kind !== 'variable' || inner.index >= pins.length) continue
          const origin = traceBack(this.shared.graph, constants, pins[inner.index])
          if (!this.isInput.has(origin.net)) continue
          const offAtPin = active?.kind === 'not' ? 1 : 0
          this.propose(origin.net, 'reset', (offAtPin ^ (origin.inverted ? 1 : 0)) as 0 | 1)
        }
      }
    }
  }

  private propose(net: number, role: TestPin['role'], value: TestPin['value']): void {
    const name = this.shared.netName(net)
    if (!this.pins.has(name)) this.pins.set(name, { name, role, value, from: 'library' })
  }

  private warnUnscanned(unscanned: number, assumed: number): void {
    const flipFlops = this.shared.unusable.count('unscanned flip-flop')
    if (assumed > 0) {
      this.shared.warn(
        'not-scanned',
        `${assumed} flip-flops are on no scan chain and are taken as scanned: the figures are a planning assumption`,
      )
    }
    if (unscanned === 0 || flipFlops === 0) return
    this.shared.warn(
      'not-scanned',
      `${flipFlops} flip-flops are on no scan chain: they are sources of X, and what they take is not observed`,
      'Give the netlist with its scan chains, or plan with the assumption that all flip-flops will be scanned.',
    )
  }

  /** The chains with their names, which are those of their scan-ins; a number tells chains of one scan-in apart. */
  private describeAll(
    traced: readonly TracedRows[],
    firstFlipFlop: ReadonlyMap<number, number>,
  ): ScanChain[] {
    const sharing = new Map<number, number>()
    return traced.map((chain) => {
      const number = (sharing.get(chain.scanIn) ?? 0) + 1
      sharing.set(chain.scanIn, number)
      const scanIn = this.shared.netName(chain.scanIn)
      if (number === 2) {
        this.shared.warn(
          'not-scanned',
          `scan-in ${quoted(scanIn)} feeds several chains: their flip-flops are not loaded independently`,
        )
      }
      return {
        name: number === 1 ? scanIn : `${scanIn} ${number}`,
        scanIn,
        scanOut: this.shared.netName(chain.scanOut),
        cells: chain.rows.map(({ row }, at) => ({
          flipFlop: firstFlipFlop.get(row) ?? 0,
          instance: this.shared.flat.cellText(row),
          loadInverted: chain.loadInverted[at],
          unloadInverted: chain.unloadInverted[at],
        })),
      }
    })
  }
}

/** `origin` is the net at which the trace from the clock pin ends, `port` the same where it is an input, else −1. */
type FoundClock = { port: number; origin: number; isFalling: boolean; isCertain: boolean }

type TracedRows = {
  scanIn: number
  scanOut: number
  rows: readonly SequentialRow[]
  loadInverted: readonly boolean[]
  unloadInverted: readonly boolean[]
}
