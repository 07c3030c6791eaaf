import type { LibraryCell } from '../../circuit/cell-library.ts'
import { closestName } from '../../source/closest-name.ts'
import { quoted, type FindingList } from '../../source/finding-list.ts'
import { FlatNet, FlatNetlist } from './flat-netlist.ts'
import type { NameTable } from './name-table.ts'
import { ConstantBit, Operation, SignalFlag, type ParsedModule } from './parsed-module.ts'

const MAX_DEPTH = 100
const MAX_ROWS = 60_000_000

/** A library cell as instances refer to it. */
type CellPorts = {
  readonly cell: number
  readonly portOf: Map<number, readonly number[]>
  supplies: Set<number>
}

/**
 * Flattens a module and all that it instantiates. Names are looked up among the library cells first, then among the
 * modules; what is found nowhere becomes a box. Errors: unknown-pin, pin-count, unsupported-construct, limit.
 */
export function elaborate(
  top: ParsedModule,
  modules: ReadonlyMap<number, ParsedModule>,
  cells: readonly LibraryCell[],
  names: NameTable,
  findings: FindingList,
): FlatNetlist {
  return new Elaborator(modules, cells, names, findings).run(top)
}

class Elaborator {
  private readonly flat: FlatNetlist
  private readonly modules: ReadonlyMap<number, ParsedModule>
  private readonly cells: readonly LibraryCell[]
  private readonly cellPorts = new Map<number, CellPorts>()
  private readonly portsOf = new Map<ParsedModule, Map<number, number>>()
  private readonly active = new Set<ParsedModule>()
  private readonly names: NameTable
  private readonly findings: FindingList
  private rows = 0
  private isStopped = false

  constructor(
    modules: ReadonlyMap<number, ParsedModule>,
    cells: readonly LibraryCell[],
    names: NameTable,
    findings: FindingList,
  ) {
    this.flat = new FlatNetlist(names)
    this.modules = modules
    this.cells = cells
    this.names = names
    this.findings = findings
    cells.forEach((cell, index) => {
      const name = names.internText(cell.name)
      if (this.cellPorts.has(name)) return
      const portOf = new Map<number, readonly number[]>()
      for (const port of cell.ports) portOf.set(names.internText(port.name), port.pins)
      for (const pin of cell.pins.keys()) {
        const bit = names.internText(cell.pins[pin].name)
        if (!portOf.has(bit)) portOf.set(bit, [pin])
      }
      const supplies = new Set(cell.supplies.map((supply) => names.internText(supply)))
      this.cellPorts.set(name, { cell: index, portOf, supplies })
    })
  }

  run(top: ParsedModule): FlatNetlist {
    const { flat } = this
    const scope = flat.addScope(top, -1, -1)
    const local = new Int32Array(top.nBits).fill(-1)
    for (const signal of top.directed.view()) {
      const flags = top.signalFlags.data[signal]
      const list =
        (flags & SignalFlag.Inout) !== 0
          ? flat.inouts
          : (flags & SignalFlag.Input) !== 0
            ? flat.inputs
            : flat.outputs
      const first = top.signalBit.data[signal]
      for (let bit = first; bit < first + top.widthOf(signal); bit++) {
        local[bit] = flat.addBit(top, scope, bit)
        list.push(local[bit])
      }
    }
    this.expand(top, scope, local, 0)
    return flat
  }

  /** Adds a module's contents; `local` holds the nets of its ports' bits and gets those of the others as they are met. */
  private expand(module: ParsedModule, scope: number, local: Int32Array, depth: number): void {
    const { flat } = this
    this.bindSupplies(module, local)
    const { data: items, length } = module.items
    const net = (bit: number): number => {
      if (bit < 0) {
        if (bit === ConstantBit.Zero) return FlatNet.Zero
        return bit === ConstantBit.One ? FlatNet.One : FlatNet.Unknown
      }
      const known = local[bit]
      return known >= 0 ? known : (local[bit] = flat.addBit(module, scope, bit))
    }
    this.active.add(module)
    let at = 0
    while (at < length && !this.isStopped && !this.findings.isFull) {
      const operation = items[at++]
      const place = items[at++]
      switch (operation) {
        case Operation.Gate: {
          flat.gateKind.push(items[at])
          flat.gateNet.push(net(items[at + 1]))
          flat.gateStart.push(flat.gateInputs.length)
          flat.gateScope.push(scope)
          flat.gatePlace.push(place)
          const count = items[at + 2]
          at += 3
          for (const end = at + count; at < end; at++) flat.gateInputs.push(net(items[at]))
          break
        }
        case Operation.Connect:
          flat.connects.push(net(items[at++]))
          flat.connects.push(net(items[at++]))
          flat.connects.push(scope)
          flat.connects.push(place)
          break
        case Operation.FlipFlop:
          for (let k = 0; k < 3; k++) flat.flipFlops.push(net(items[at++]))
          flat.flipFlops.push(scope)
          flat.flipFlops.push(place)
          break
        case Operation.ThreeState:
          for (let k = 0; k < 3; k++) flat.threeState.push(net(items[at++]))
          flat.threeState.push(items[at++])
          flat.threeState.push(scope)
          flat.threeState.push(place)
          break
        case Operation.Instance:
          at = this.instantiate(module, scope, at, place, net, depth)
          break
        default:
          throw new RangeError(`operation ${operation} at ${at - 2}`)
      }
      if (++this.rows > MAX_ROWS || flat.nNets > MAX_ROWS) {
        this.findings.error(
          'limit',
          module.source,
          place,
          place + 1,
          `more than ${MAX_ROWS} nets or instances once the hierarchy is flattened`,
        )
        this.isStopped = true
      }
    }
    this.active.delete(module)
  }

  private bindSupplies(module: ParsedModule, local: Int32Array): void {
    for (let signal = 0; signal < module.nSignals; signal++) {
      const flags = module.signalFlags.data[signal]
      if ((flags & (SignalFlag.Supply0 | SignalFlag.Supply1)) === 0) continue
      const net = (flags & SignalFlag.Supply0) !== 0 ? FlatNet.Zero : FlatNet.One
      const first = module.signalBit.data[signal]
      for (let bit = first; bit < first + module.widthOf(signal); bit++) if (local[bit] < 0) local[bit] = net
    }
  }

  /** One instance, from its module's name in the items on; returns where the items go on. */
  private instantiate(
    module: ParsedModule,
    scope: number,
    from: number,
    place: number,
    net: (bit: number) => number,
    depth: number,
  ): number {
    const items = module.items.data
    const name = items[from]
    const cell = this.cellPorts.get(name)
    if (cell !== undefined) return this.placeCell(cell, module, scope, from, place, net)
    const child = this.modules.get(name)
    if (child === undefined) return this.placeBox(scope, from, place, net)
    return this.placeModule(child, module, scope, from, place, net, depth)
  }

  private placeCell(
    ports: CellPorts,
    module: ParsedModule,
    scope: number,
    from: number,
    place: number,
    net: (bit: number) => number,
  ): number {
    const { flat } = this
    const items = module.items.data
    const cell = this.cells[ports.cell]
    flat.cell.push(ports.cell)
    flat.cellScope.push(scope)
    flat.cellName.push(items[from + 1])
    flat.cellPlace.push(place)
    const start = flat.cellPins.length
    flat.cellStart.push(start)
    flat.cellPins.fill(-1, cell.pins.length)
    const count = items[from + 3]
    let at = from + 4
    for (let k = 0; k < count; k++) {
      const pinName = items[at]
      const width = items[at + 1]
      at += 2
      const pins = pinName < 0 ? cell.ports[k]?.pins : ports.portOf.get(pinName)
      if (pins === undefined) this.reportPin(module, place, pinName, from, cell, ports, count)
      else {
        if (width !== pins.length && width !== 0) this.warnWidth(module, place, pinName, width, pins.length)
        const shared = Math.min(width, pins.length)
        for (let k = 1; k <= shared; k++) {
          const bit = items[at + width - k]
          const pin = start + pins[pins.length - k]
          if (bit === ConstantBit.Open) continue
          if (flat.cellPins.data[pin] >= 0) this.reportTwice(module, place, pinName, cell.name)
          flat.cellPins.data[pin] = net(bit)
        }
      }
      at += width
    }
    return at
  }

  private reportPin(
    module: ParsedModule,
    place: number,
    pinName: number,
    from: number,
    cell: LibraryCell,
    ports: CellPorts,
    count: number,
  ): void {
    const instance = this.names.text(module.items.data[from + 1])
    if (pinName < 0) {
      this.findings.error(
        'pin-count',
        module.source,
        place,
        place + instance.length,
        `instance ${quoted(instance)} connects ${count} pins by position; cell ${quoted(cell.name)} has ${cell.ports.length}`,
      )
      return
    }
    if (ports.supplies.has(pinName)) return
    const name = this.names.text(pinName)
    const span = this.spanOfPin(module, place, name)
    const close = closestName(
      name,
      cell.ports.map((port) => port.name),
    )
    this.findings.error(
      'unknown-pin',
      module.source,
      span.start,
      span.end,
      `cell ${quoted(cell.name)} has no pin ${quoted(name)}`,
      {
        hint:
          close === null
            ? `Its pins are ${cell.ports.slice(0, 12).map((port) => port.name).join(', ')}.` // prettier-ignore
            : `Did you mean ${quoted(close)}?`,
      },
    )
  }

  private placeBox(scope: number, from: number, place: number, net: (bit: number) => number): number {
    const { flat } = this
    const items = flat.scopeModules[scope].items.data
    const first = flat.boxNets.length
    const count = items[from + 3]
    let at = from + 4
    for (let k = 0; k < count; k++) {
      const width = items[at + 1]
      at += 2
      for (const end = at + width; at < end; at++) if (items[at] >= 0) flat.boxNets.push(net(items[at]))
    }
    for (const value of [items[from], scope, items[from + 1], place, first, flat.boxNets.length]) {
      flat.boxes.push(value)
    }
    return at
  }

  private placeModule(
    child: ParsedModule,
    module: ParsedModule,
    scope: number,
    from: number,
    place: number,
    net: (bit: number) => number,
    depth: number,
  ): number {
    const items = module.items.data
    const instance = this.names.text(items[from + 1])
    const end = place + instance.length
    const childName = this.names.text(child.name)
    if (items[from + 2] === 1 && child.usesParameters) {
      this.findings.error(
        'unsupported-construct',
        module.source,
        place,
        end,
        `instance ${quoted(instance)} overrides parameters of ${quoted(childName)}, which change it`,
        { hint: 'Write the netlist out with the parameters resolved.' },
      )
    }
    if (this.active.has(child)) {
      this.findings.error(
        'unsupported-construct',
        module.source,
        place,
        end,
        `module ${quoted(childName)} contains itself through instance ${quoted(instance)}`,
      )
      return this.endOfConnections(items, from)
    }
    if (depth === MAX_DEPTH) {
      this.findings.error('limit', module.source, place, end, `modules nested deeper than ${MAX_DEPTH}`)
      return this.endOfConnections(items, from)
    }
    const ports = this.portTable(child)
    const local = new Int32Array(child.nBits).fill(-1)
    const count = items[from + 3]
    let at = from + 4
    for (let k = 0; k < count; k++) {
      const pinName = items[at]
      const width = items[at + 1]
      at += 2
      const signal =
        pinName < 0 ? (k < child.ports.length ? child.ports.data[k] : undefined) : ports.get(pinName)
      if (signal === undefined) {
        this.reportPort(module, child, place, end, pinName, count)
      } else if (width > 0) {
        const portWidth = child.widthOf(signal)
        if (width !== portWidth) this.warnWidth(module, place, pinName, width, portWidth)
        const first = child.signalBit.data[signal]
        for (let k = 1; k <= Math.min(width, portWidth); k++) {
          const bit = items[at + width - k]
          if (bit !== ConstantBit.Open) local[first + portWidth - k] = net(bit)
        }
      }
      at += width
    }
    this.expand(child, this.flat.addScope(child, scope, items[from + 1]), local, depth + 1)
    return at
  }

  private endOfConnections(items: Int32Array, from: number): number {
    let at = from + 4
    for (let k = items[from + 3]; k > 0; k--) at += 2 + items[at + 1]
    return at
  }

  private portTable(module: ParsedModule): Map<number, number> {
    let ports = this.portsOf.get(module)
    if (ports === undefined) {
      ports = new Map()
      for (const signal of module.ports.view()) ports.set(module.signalName.data[signal], signal)
      this.portsOf.set(module, ports)
    }
    return ports
  }

  private reportPort(
    module: ParsedModule,
    child: ParsedModule,
    place: number,
    end: number,
    pinName: number,
    count: number,
  ): void {
    const childName = this.names.text(child.name)
    if (pinName < 0) {
      this.findings.error(
        'pin-count',
        module.source,
        place,
        end,
        `${count} connections by position; module ${quoted(childName)} has ${child.ports.length} ports`,
      )
      return
    }
    const name = this.names.text(pinName)
    const span = this.spanOfPin(module, place, name)
    const candidates = Array.from(child.ports.view(), (signal) =>
      this.names.text(child.signalName.data[signal]),
    )
    const close = closestName(name, candidates)
    this.findings.error(
      'unknown-pin',
      module.source,
      span.start,
      span.end,
      `module ${quoted(childName)} has no port ${quoted(name)}`,
      { hint: close === null ? null : `Did you mean ${quoted(close)}?` },
    )
  }

  private reportTwice(module: ParsedModule, place: number, pinName: number, cell: string): void {
    const name = pinName < 0 ? '' : this.names.text(pinName)
    const span = this.spanOfPin(module, place, name)
    this.findings.error(
      'duplicate-declaration',
      module.source,
      span.start,
      span.end,
      `pin ${quoted(name)} of ${quoted(cell)} is connected twice`,
    )
  }

  private warnWidth(
    module: ParsedModule,
    place: number,
    pinName: number,
    width: number,
    wanted: number,
  ): void {
    const span = this.spanOfPin(module, place, pinName < 0 ? '' : this.names.text(pinName))
    this.findings.warn(
      'width-mismatch',
      module.source,
      span.start,
      span.end,
      `${width} bit${width === 1 ? ' is' : 's are'} connected to a port of ${wanted}; ` +
        'they are matched from the right, and what is left stays open',
    )
  }

  /** Where `.NAME` stands in the instance at that place, so that no place need be kept for each of millions of pins. */
  private spanOfPin(module: ParsedModule, place: number, name: string): { start: number; end: number } {
    const { text } = module.source
    if (name !== '') {
      const limit = Math.min(text.length, place + 100_000)
      for (let at = text.indexOf('.', place); at >= 0 && at < limit; at = text.indexOf('.', at + 1)) {
        let start = at + 1
        while (text.charCodeAt(start) <= 32) start++
        if (text[start] === '\\') start++
        if (!text.startsWith(name, start)) continue
        if (/[A-Za-z0-9_$]/.test(text[start + name.length] ?? '')) continue
        return { start, end: start + name.length }
      }
    }
    return { start: place, end: Math.min(text.length, place + 1) }
  }
}
