import type { LibraryCell } from '../../circuit/cell-library.ts'
import { CircuitBuilder, isGate, type CircuitFault } from '../../circuit/circuit-builder.ts'
import { GateKind, LineKind, type Circuit, type LineTable } from '../../circuit/circuit.ts'
import { NetGraph } from '../../circuit/net-graph.ts'
import type { FlipFlopClock, Netlist, TestPin } from '../../circuit/netlist.ts'
import { listLines } from '../../faults/list-lines.ts'
import { MAX_DIAGNOSTICS, type DiagnosticCode } from '../../source/diagnostic.ts'
import { quoted, type FindingList } from '../../source/finding-list.ts'
import { CellAssembler } from './assemble-cells.ts'
import { FlatNet, type FlatNetlist } from './flat-netlist.ts'
import { findAliases } from './net-aliases.ts'
import { observedNets, patternInputs } from './pattern-ports.ts'
import { UnusableSources } from './unusable-sources.ts'
import { placeWrittenFlipFlops, writtenClockPins } from './written-flip-flops.ts'

export type AssemblyOptions = {
  readonly top: string
  readonly testPins: readonly TestPin[]
  readonly assumeScanned: boolean
}

/** A driver that can let go of its net: it drives `data` where `enable` is 1. */
export type ThreeStateDriver = {
  readonly data: number
  readonly enable: number
  readonly place: number
  readonly scope: number
}

/** A flip-flop of the full-scan view, before the circuit is built. */
export type ScannedFlipFlop = { readonly net: number; readonly clock: FlipFlopClock }

/**
 * Builds the full-scan view of a flat netlist: finds each net's driver, what is scanned and what gives X, and adds the
 * report. Returns null where errors stand in the way.
 */
export function assemble(
  flat: FlatNetlist,
  cells: readonly LibraryCell[],
  options: AssemblyOptions,
  findings: FindingList,
): Netlist | null {
  return new Assembler(flat, cells, options, findings).run()
}

/**
 * The state that the parts of assembly share. Nets of the graph are those of the flat netlist, with aliases resolved by
 * `rootOf`, and after them the assembler's own.
 */
export class Assembler {
  readonly graph: NetGraph = new NetGraph()
  readonly unusable: UnusableSources = new UnusableSources()
  readonly flipFlops: ScannedFlipFlop[] = []
  /** True where a library cell is used, so that faults sit on cell pins. */
  readonly isMapped: boolean
  readonly flat: FlatNetlist
  readonly cells: readonly LibraryCell[]
  readonly options: AssemblyOptions
  readonly findings: FindingList
  /** Names of nets that the assembler made and that people see. */
  readonly ownNames: Map<number, string> = new Map()
  /** Per flat net: the net that stands for it. */
  private root: Int32Array = new Int32Array(0)
  /** Per net: where its driver stands, −1 where it has none or none that was written. */
  private driverPlace = new Int32Array(0)
  private driverScope = new Int32Array(0)
  private readonly threeState = new Map<number, ThreeStateDriver[]>()
  private readonly innerCount = new Map<number, number>()

  constructor(
    flat: FlatNetlist,
    cells: readonly LibraryCell[],
    options: AssemblyOptions,
    findings: FindingList,
  ) {
    this.flat = flat
    this.cells = cells
    this.options = options
    this.findings = findings
    this.isMapped = flat.cell.length > 0
  }

  run(): Netlist | null {
    const { flat, graph } = this
    for (let net = 0; net < flat.nNets; net++) graph.addNet()
    graph.drive(FlatNet.Zero, GateKind.Const0)
    graph.drive(FlatNet.One, GateKind.Const1)
    graph.drive(FlatNet.Unknown, GateKind.Unknown)
    this.root = this.isMapped ? findAliases(flat) : Int32Array.from({ length: flat.nNets }, (_, net) => net)
    this.driverPlace = new Int32Array(flat.nNets).fill(-1)
    this.driverScope = new Int32Array(flat.nNets)
    for (const net of flat.inputs.view()) this.drivenByPort(net)
    this.driveGates()
    const cellAssembler = new CellAssembler(this)
    cellAssembler.placeCells()
    this.placeBoxes()
    this.resolveThreeState()
    if (this.findings.hasErrors) return null
    const inputs = this.listInputs()
    placeWrittenFlipFlops(this, inputs)
    cellAssembler.placeSequential(inputs)
    cellAssembler.addWrittenGates()
    this.reportUndriven(cellAssembler)
    if (this.findings.hasErrors) return null
    return this.finish(inputs, cellAssembler)
  }

  /** The net that stands for a flat net. */
  rootOf(net: number): number {
    return this.root[net]
  }

  /** Notes that something written at that place drives the net; false where something else does already. */
  claim(net: number, scope: number, place: number): boolean {
    if (this.driverPlace[net] < 0 && !this.graph.isDriven(net)) {
      this.driverPlace[net] = place
      this.driverScope[net] = scope
      return true
    }
    const source = this.flat.sourceOf(scope)
    const firstSource = this.flat.sourceOf(this.driverScope[net])
    const first = this.driverPlace[net]
    this.findings.error(
      'double-driver',
      source,
      place,
      this.tokenEnd(source.text, place),
      `net ${quoted(this.flat.netText(net))} is driven a second time; expected one driver a net`,
      {
        hint: 'Remove one of the two, or give one of them another net.',
        notes:
          first < 0
            ? []
            : [
                {
                  file: firstSource.name,
                  span: { start: first, end: this.tokenEnd(firstSource.text, first) },
                  message: 'first driven here',
                },
              ],
      },
    )
    return false
  }

  addThreeState(net: number, driver: ThreeStateDriver): void {
    const drivers = this.threeState.get(net)
    if (drivers === undefined) this.threeState.set(net, [driver])
    else drivers.push(driver)
  }

  /** A gate that is part of what drives a net, named after it. */
  private innerGate(owner: number, kind: GateKind, ...inputs: readonly number[]): number {
    const net = this.graph.gate(kind, ...inputs)
    const number = (this.innerCount.get(owner) ?? 0) + 1
    this.innerCount.set(owner, number)
    this.ownNames.set(net, `${this.netName(owner)}:${number}`)
    return net
  }

  /** The name of a net for people. */
  netName(net: number): string {
    return net < this.flat.nNets ? this.flat.netText(net) : (this.ownNames.get(net) ?? '')
  }

  /** Warns about what stands at a place of a scope's module; without a place, about the netlist, at its top's name. */
  warn(code: DiagnosticCode, message: string, hint: string | null = null, scope = 0, place = -1): void {
    const { source, place: modulePlace } = this.flat.scopeModules[scope]
    const start = place < 0 ? modulePlace : place
    this.findings.warn(code, source, start, this.tokenEnd(source.text, start), message, { hint })
  }

  private tokenEnd(text: string, start: number): number {
    let end = start + 1
    while (end < text.length && /[A-Za-z0-9_$.[\]]/.test(text[end])) end++
    return end
  }

  private drivenByPort(net: number): void {
    const root = this.rootOf(net)
    if (this.graph.isDriven(root)) return
    this.graph.drive(root, GateKind.Input)
    this.driverPlace[root] = this.flat.netPlace.data[net]
  }

  private driveGates(): void {
    const { flat, graph } = this
    for (let row = 0; row < flat.gateKind.length; row++) {
      const net = this.rootOf(flat.gateNet.data[row])
      if (!this.claim(net, flat.gateScope.data[row], flat.gatePlace.data[row])) continue
      graph.open(net, flat.gateKind.data[row] as GateKind)
      const end = row + 1 < flat.gateStart.length ? flat.gateStart.data[row + 1] : flat.gateInputs.length
      for (let at = flat.gateStart.data[row]; at < end; at++) {
        graph.addInput(net, this.rootOf(flat.gateInputs.data[at]))
      }
    }
    const { data: connects, length } = flat.connects
    for (let at = 0; at < length; at += 4) {
      const to = this.rootOf(connects[at])
      const from = this.rootOf(connects[at + 1])
      if (this.isMapped && to === from) continue
      if (!this.claim(to, connects[at + 2], connects[at + 3])) continue
      if (from === FlatNet.Zero) graph.drive(to, GateKind.Const0)
      else if (from === FlatNet.One) graph.drive(to, GateKind.Const1)
      else if (from === FlatNet.Unknown) graph.drive(to, GateKind.Unknown)
      else graph.drive(to, GateKind.Buffer, from)
    }
    const { data: gates, length: end } = flat.threeState
    for (let at = 0; at < end; at += 6) {
      const [net, data, control, flags, scope, place] = gates.subarray(at, at + 6)
      const root = this.rootOf(net)
      const straight = (pin: number): number => this.rootOf(pin)
      const inverted = (pin: number): number => this.innerGate(root, GateKind.Not, this.rootOf(pin))
      const driven = ((flags & 2) === 0 ? straight : inverted)(data)
      const enable = ((flags & 1) === 0 ? straight : inverted)(control)
      this.addThreeState(root, { data: driven, enable, scope, place })
    }
  }

  /** Boxes drive what nothing else drives; all else that they connect is an input of theirs. */
  private placeBoxes(): void {
    const { flat, graph, unusable } = this
    const { data: boxes, length } = flat.boxes
    for (let at = 0; at < length; at += 6) {
      const [, scope, name, place, first, end] = boxes.subarray(at, at + 6)
      const row = unusable.add('black box', flat.scopeText(scope) + flat.names.text(name))
      for (let k = first; k < end; k++) {
        const net = this.rootOf(flat.boxNets.data[k])
        if (
          graph.isDriven(net) ||
          this.driverPlace[net] >= 0 ||
          this.threeState.has(net) ||
          this.isFlipFlop(net)
        ) {
          row.unobserved.push(net)
        } else {
          this.driverPlace[net] = place
          this.driverScope[net] = scope
          graph.drive(net, GateKind.Unknown)
          row.sources.push(net)
        }
      }
    }
  }

  private flipFlopNets: Set<number> | null = null

  private isFlipFlop(net: number): boolean {
    if (this.flipFlopNets === null) {
      this.flipFlopNets = new Set()
      const { data, length } = this.flat.flipFlops
      for (let at = 0; at < length; at += 5) this.flipFlopNets.add(this.rootOf(data[at + 1]))
    }
    return this.flipFlopNets.has(net)
  }

  /** One driver that lets go gives X while it does; several on one net give X always. */
  private resolveThreeState(): void {
    const { graph, unusable } = this
    for (const [net, drivers] of this.threeState) {
      if (drivers.length === 1 && this.driverPlace[net] < 0 && !graph.isDriven(net)) {
        const { data, enable, place, scope } = drivers[0]
        this.driverPlace[net] = place
        this.driverScope[net] = scope
        const driven = this.innerGate(net, GateKind.And, enable, data)
        const disabled = this.innerGate(net, GateKind.Not, enable)
        const floating = this.innerGate(net, GateKind.And, disabled, FlatNet.Unknown)
        graph.drive(net, GateKind.Or, driven, floating)
        continue
      }
      const row = unusable.add('three-state net', this.netName(net))
      if (this.driverPlace[net] < 0) {
        this.driverPlace[net] = drivers[0].place
        this.driverScope[net] = drivers[0].scope
      } else if (graph.isDriven(net)) row.unobserved.push(...graph.inputs(net))
      graph.drive(net, GateKind.Unknown)
      row.sources.push(net)
      for (const { data, enable } of drivers) row.unobserved.push(data, enable)
    }
    for (const net of this.flat.inouts.view()) {
      const root = this.rootOf(net)
      if (!graph.isDriven(root) && this.driverPlace[root] < 0) graph.drive(root, GateKind.Input)
    }
  }

  /** Input nets in the order of the declarations, ports of both directions that nothing drives last. */
  private listInputs(): number[] {
    const isInput = (net: number): boolean => this.graph.kind.data[net] === GateKind.Input
    const inputs = Array.from(this.flat.inputs.view(), (net) => this.rootOf(net)).filter(isInput)
    const loaded = this.loadedNets()
    for (const net of this.flat.inouts.view()) {
      const root = this.rootOf(net)
      if (isInput(root) && loaded[root] === 1) inputs.push(root)
    }
    return inputs
  }

  /** 1 for every net that a gate or a written flip-flop takes in. */
  private loadedNets(): Uint8Array {
    const { graph, flat } = this
    const loaded = new Uint8Array(graph.nNets)
    for (let net = 0; net < graph.nNets; net++) {
      if (!isGate(graph.kind.data[net])) continue
      for (let k = graph.count(net) - 1; k >= 0; k--) loaded[graph.input(net, k)] = 1
    }
    for (let at = 0; at < flat.flipFlops.length; at += 5) {
      loaded[this.rootOf(flat.flipFlops.data[at])] = 1
      loaded[this.rootOf(flat.flipFlops.data[at + 2])] = 1
    }
    for (const net of flat.cellPins.view()) if (net >= 0) loaded[this.rootOf(net)] = 1
    return loaded
  }

  /** Nets that something takes in and nothing drives carry X. */
  private reportUndriven(cellAssembler: CellAssembler): void {
    const { flat, graph, unusable } = this
    const used = this.loadedNets()
    cellAssembler.markPinNets(used)
    for (const net of flat.outputs.view()) used[this.rootOf(net)] = 1
    const examples: number[] = []
    const end = graph.nNets
    for (let net = 0; net < end; net++) {
      if (used[net] === 0 || graph.isDriven(net)) continue
      graph.drive(net, GateKind.Unknown)
      unusable.add('undriven net', this.netName(net)).sources.push(net)
      if (net < flat.nNets && examples.length < 10) examples.push(net)
    }
    const count = unusable.count('undriven net')
    if (count === 0 || examples.length === 0) return
    const [net] = examples
    const shown = examples.slice(0, 3).map((each) => quoted(this.netName(each)))
    this.warn(
      'undriven-net',
      count === 1
        ? `net ${shown[0]} is used but nothing drives it: it carries X`
        : `${count} nets are used but nothing drives them, such as ${shown.join(', ')}: they carry X`,
      flat.isImplicit(net) ? 'It is declared nowhere: its name may be misspelled.' : null,
      flat.netScope.data[net],
      flat.netPlace.data[net],
    )
  }

  private finish(inputs: readonly number[], cellAssembler: CellAssembler): Netlist | null {
    const { flat, graph } = this
    const outputs = observedNets(this)
    const given = patternInputs(this, inputs, outputs)
    const builder = new CircuitBuilder()
    const netOf = new Int32Array(graph.nNets).fill(-1)
    const add = (net: number): void => {
      if (netOf[net] < 0) netOf[net] = builder.addNet(this.netName(net))
    }
    const used = this.usedNets(outputs, cellAssembler)
    for (const net of given) add(net)
    for (const { net } of this.flipFlops) add(net)
    for (let net = 0; net < graph.nNets; net++) if (used[net] === 1) add(net)

    for (const net of given) builder.drive(netOf[net], GateKind.Input)
    for (const { net } of this.flipFlops)
      builder.drive(netOf[net], GateKind.FlipFlop, [netOf[graph.input(net, 0)]])
    let gates = 0
    const fanin: number[] = []
    for (let net = 0; net < graph.nNets; net++) {
      if (netOf[net] < 0 || builder.isDriven(netOf[net])) continue
      const kind = graph.kind.data[net]
      fanin.length = 0
      for (let k = 0; k < graph.count(net); k++) fanin.push(netOf[graph.input(net, k)])
      builder.drive(netOf[net], kind as GateKind, fanin)
      if (isGate(kind)) gates++
    }
    for (const net of outputs) builder.observe(netOf[net])
    if (outputs.length + this.flipFlops.length === 0) {
      const module = flat.scopeModules[0]
      this.findings.error(
        'no-outputs',
        module.source,
        module.place,
        this.tokenEnd(module.source.text, module.place),
        'the top module has no output and no scanned flip-flop, so no fault could be observed',
        { hint: 'Choose another top module, or declare an output.' },
      )
      return null
    }
    const pins = this.isMapped ? cellAssembler.pinTable(netOf) : null
    const circuit = this.finishCircuit(builder, netOf, pins)
    return {
      circuit,
      chains: cellAssembler.chains(),
      clocks: this.flipFlops.map((flipFlop) => flipFlop.clock),
      report: {
        format: 'verilog',
        top: this.options.top,
        gates: this.isMapped ? cellAssembler.computingCells : gates,
        flipFlops: cellAssembler.flipFlopCount + flat.flipFlops.length / 5,
        lines: pins === null ? listLines(circuit).table.n : pins.n,
        cellsUsed: cellAssembler.cellsUsed(),
        cellsUnknown: this.cellsUnknown(),
        unusable: this.unusable.finish(netOf),
        testPins: this.isMapped ? cellAssembler.testPins() : writtenClockPins(this),
      },
    }
  }

  /** Builds the circuit, cutting loops with X until none is left: of each loop the gate that closes it. */
  private finishCircuit(builder: CircuitBuilder, netOf: Int32Array, pins: LineTable | null): Circuit {
    const result = builder.finish(this.options.top, pins)
    if (!Array.isArray(result)) return result as Circuit
    const graphNetOf = new Int32Array(builder.nNets)
    netOf.forEach((net, graphNet) => {
      if (net >= 0) graphNetOf[net] = graphNet
    })
    const cut = new Set<number>()
    for (let faults = result as readonly CircuitFault[]; ;) {
      for (const fault of faults) {
        if (fault.kind !== 'combinational-loop') throw new RangeError('a net without a driver')
        const [net] = fault.nets
        if (cut.has(net)) continue
        cut.add(net)
        builder.cut(net)
        if (cut.size <= MAX_DIAGNOSTICS) this.reportLoop(fault.nets.map((each) => graphNetOf[each]))
        const row = this.unusable.add('cut loop', builder.names[net])
        row.sources.push(graphNetOf[net])
        row.unobserved.push(...this.graph.inputs(graphNetOf[net]))
      }
      const next = builder.finish(this.options.top, pins)
      if (!Array.isArray(next)) {
        const circuit = next as Circuit
        if (pins !== null) leaveOutCutGates(pins, circuit)
        return circuit
      }
      faults = next as readonly CircuitFault[]
    }
  }

  private reportLoop(nets: readonly number[]): void {
    const { flat } = this
    const path = nets.filter((net) => this.netName(net) !== '')
    const shown = path.slice(0, 16).map((net) => this.netName(net))
    const written = path.find((net) => net < flat.nNets)
    this.warn(
      'combinational-loop',
      `a loop without a flip-flop is cut with X: ${shown.join(' → ')}` +
        `${path.length > 16 ? ` … (${path.length} nets)` : ''} → ${shown[0] ?? ''}`,
      null,
      written === undefined ? 0 : flat.netScope.data[written],
      written === undefined ? -1 : flat.netPlace.data[written],
    )
  }

  /** 1 for each net that belongs in the circuit: written drivers and everything that feeds them. */
  private usedNets(outputs: readonly number[], cellAssembler: CellAssembler): Uint8Array {
    const { graph } = this
    const used = new Uint8Array(graph.nNets)
    for (let net = 0; net < graph.nNets; net++) {
      const kind = graph.kind.data[net]
      const isFixed = net === FlatNet.Zero || net === FlatNet.One || net === FlatNet.Unknown
      if (!isFixed && graph.isDriven(net) && kind !== GateKind.Input && this.rootOfAny(net) === net)
        used[net] = 1
      for (let k = graph.count(net) - 1; k >= 0; k--) {
        const input = graph.input(net, k)
        used[input] = 1
      }
    }
    for (const net of outputs) used[net] = 1
    cellAssembler.markPinNets(used)
    return used
  }

  private rootOfAny(net: number): number {
    return net < this.root.length ? this.root[net] : net
  }

  private cellsUnknown(): { cell: string; count: number }[] {
    const counts = new Map<number, number>()
    for (let at = 0; at < this.flat.boxes.length; at += 6) {
      const name = this.flat.boxes.data[at]
      counts.set(name, (counts.get(name) ?? 0) + 1)
    }
    return Array.from(counts, ([name, count]) => ({ cell: this.flat.names.text(name), count })).sort(
      (a, b) => b.count - a.count,
    )
  }
}

/** Faults on a gate that a cut loop has lost its inputs of, and on nets of X, are outside. */
function leaveOutCutGates(pins: LineTable, circuit: Circuit): void {
  for (let row = 0; row < pins.n; row++) {
    const place = pins.sink[row] >= 0 ? pins.sink[row] : pins.net[row]
    if (circuit.kind[place] !== GateKind.Unknown) continue
    pins.kind[row] = LineKind.Outside
    pins.sink[row] = -1
    pins.pin[row] = 0
  }
}
