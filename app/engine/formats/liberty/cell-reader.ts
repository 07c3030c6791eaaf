import { shiftInversion } from '../../circuit/cell-function.ts'
import type {
  CellFunction,
  CellKind,
  CellPin,
  CellPort,
  CellScan,
  CellState,
  LibraryCell,
} from '../../circuit/cell-library.ts'
import { closestName } from '../../source/closest-name.ts'
import { quoted, type FindingList } from '../../source/finding-list.ts'
import type { Source } from '../../source/source.ts'
import { isFault, parseFunction } from './boolean-function.ts'
import type { LibertyAttribute, LibertyGroup, LibertyValue } from './liberty-syntax.ts'

/** The indices of a bus, from its left. */
export type BusType = { readonly from: number; readonly to: number }

/** What the library says for all of its cells. */
export type LibraryContext = {
  readonly types: ReadonlyMap<string, BusType>
  /** Names of voltages, which netlists may connect as pins that a cell's own group does not list. */
  readonly supplies: readonly string[]
}

/** A pin while its cell is being read: what is said about it, by itself and by the bus or bundle that it belongs to. */
type OpenPin = {
  readonly name: string
  /** The bus or bundle, and the bit's number in it from the left. */
  readonly port: string
  readonly bit: number
  readonly groups: readonly LibertyGroup[]
}

/** A bit of storage while its cell is being read; `bit` is its number in a bank. */
type OpenState = { readonly group: LibertyGroup; readonly bit: number; readonly width: number }

const UNKNOWN: CellFunction = { kind: 'constant', value: 'X' }

/** What a three-state pin of a cell that always lets go has: it only holds its net. */
const NEVER_DRIVES = 1

/** Reads one cell group of a library. */
export class CellReader {
  private readonly source: Source
  private readonly group: LibertyGroup
  private readonly context: LibraryContext
  private readonly findings: FindingList
  private readonly name: string
  private readonly openPins: OpenPin[] = []
  private readonly ports: { name: string; pins: number[] }[] = []
  private readonly pinByName = new Map<string, number>()
  private readonly openStates: OpenState[] = []

  constructor(source: Source, group: LibertyGroup, context: LibraryContext, findings: FindingList) {
    this.source = source
    this.group = group
    this.context = context
    this.findings = findings
    this.name = group.values[0]?.text ?? ''
  }

  read(): LibraryCell {
    const { group } = this
    for (const part of group.groups) {
      if (part.name === 'pin') for (const { text } of part.values) this.addPort(text, [text], [part])
      else if (part.name === 'bus') this.addBus(part)
      else if (part.name === 'bundle') this.addBundle(part)
      else if (part.name === 'ff' || part.name === 'latch') this.addStates(part, 1)
      else if (part.name === 'ff_bank' || part.name === 'latch_bank')
        this.addStates(part, this.bankWidth(part))
    }
    const hasTable = this.warnStatetable()
    const directed = this.openPins.map((pin) => this.readDirection(pin))
    const states = this.openStates.map((state) => this.readState(state))
    const isUsable = !hasTable && states.every((state) => state !== null)
    const pins = this.openPins.map((pin, index) => this.readPin(pin, directed[index], isUsable))
    const drives = pins.some(
      (pin) => !pin.isBusHold && (pin.direction === 'output' || pin.direction === 'inout'),
    )
    const kind = this.kindOf(pins, states, isUsable, drives)
    const known = kind === 'flip-flop' || kind === 'latch' ? states.filter((state) => state !== null) : []
    const isComputed = kind === 'combinational' || known.length > 0
    return {
      name: this.name,
      kind,
      pins: pins.map((pin) => (isComputed ? pin : { ...pin, function: null, threeState: null })),
      ports: this.ports satisfies readonly CellPort[],
      supplies: [...this.supplyPins(), ...this.context.supplies],
      states: known,
      scan: kind === 'flip-flop' ? this.readScan(known) : null,
    }
  }

  private supplyPins(): string[] {
    return this.group.groups
      .filter((part) => part.name === 'pg_pin')
      .flatMap((part) => part.values.map(textOf))
  }

  private kindOf(
    pins: readonly CellPin[],
    states: readonly (CellState | null)[],
    isUsable: boolean,
    drives: boolean,
  ): CellKind {
    if (this.attribute(this.group, 'clock_gating_integrated_cell') !== undefined) return 'clock gate'
    if (!drives) return 'physical'
    if (!isUsable) return 'black box'
    if (states.some((state) => state?.kind === 'latch')) return 'latch'
    if (states.length > 0) return 'flip-flop'
    return pins.some((pin) => pin.function !== null && pin.function !== UNKNOWN)
      ? 'combinational'
      : 'black box'
  }

  private warnStatetable(): boolean {
    const table = this.group.groups.find((part) => part.name === 'statetable')
    if (table === undefined) return false
    this.warn(
      table.place,
      table.name.length,
      `the statetable of cell ${quoted(this.name)} is not supported: its outputs carry X`,
    )
    return true
  }

  // Pins

  private addPort(name: string, pinNames: readonly string[], groups: readonly LibertyGroup[]): void {
    const pins: number[] = []
    pinNames.forEach((pinName, bit) => {
      if (this.pinByName.has(pinName)) {
        this.warn(
          groups[0].place,
          groups[0].name.length,
          `pin ${quoted(pinName)} of cell ${quoted(this.name)} is defined again`,
        )
        return
      }
      const own = groups
        .flatMap((group) => group.groups)
        .filter((part) => part.values.some((each) => each.text === pinName))
      pins.push(this.openPins.length)
      this.pinByName.set(pinName, this.openPins.length)
      this.openPins.push({ name: pinName, port: name, bit, groups: [...own, ...groups] })
    })
    if (pins.length > 0) this.ports.push({ name, pins })
  }

  /** bus (NAME) { bus_type : TYPE; … pin (NAME[0]) { … } } */
  private addBus(group: LibertyGroup): void {
    const name = group.values[0]?.text ?? ''
    const typeName = this.attribute(group, 'bus_type')
    const type = typeName && this.context.types.get(typeName.text)
    if (!type) {
      this.warn(
        group.place,
        group.name.length,
        `bus ${quoted(name)} of cell ${quoted(this.name)} has no type that the library defines; one bit is assumed`,
      )
      this.addPort(name, [name], [group])
      return
    }
    const names: string[] = []
    const step = type.from >= type.to ? -1 : 1
    for (let index = type.from; ; index += step) {
      names.push(`${name}[${index}]`)
      if (index === type.to) break
    }
    this.addPort(name, names, [group])
  }

  /** bundle (NAME) { members (A, B); … } */
  private addBundle(group: LibertyGroup): void {
    const members = group.attributes.find((each) => each.name === 'members')?.values.map(textOf) ?? []
    const names = members.flatMap((member) => member.split(/[\s,]+/)).filter((member) => member !== '')
    this.addPort(group.values[0]?.text ?? '', names, [group])
  }

  private readDirection(pin: OpenPin): CellPin['direction'] {
    const value = this.pinAttribute(pin, 'direction')
    const text = value?.text.toLowerCase()
    if (text === 'input' || text === 'output' || text === 'inout' || text === 'internal') return text
    const [group] = pin.groups
    const found = value === undefined ? 'has no direction' : `has the direction ${quoted(value.text)}`
    this.warn(
      value?.place ?? group.place,
      value?.text.length ?? group.name.length,
      `pin ${quoted(pin.name)} of cell ${quoted(this.name)} ${found}; it is taken as an input`,
    )
    return 'input'
  }

  private readPin(pin: OpenPin, direction: CellPin['direction'], isUsable: boolean): CellPin {
    const context = { port: pin.port, bit: pin.bit }
    const threeState = this.readFunction(this.pinAttribute(pin, 'three_state'), context)
    const driverType = this.pinAttribute(pin, 'driver_type')?.text
    const isBusHold =
      direction !== 'input' &&
      (driverType === 'bus_hold' || (threeState?.kind === 'constant' && threeState.value === NEVER_DRIVES))
    let computed: CellFunction | null = null
    if (direction !== 'input' && !isBusHold && isUsable) {
      computed = this.readFunction(this.pinAttribute(pin, 'function'), context)
      if (computed === null && direction === 'output') computed = UNKNOWN
    }
    return {
      name: pin.name,
      direction,
      function: computed,
      threeState: isBusHold ? null : threeState,
      isBusHold,
    }
  }

  // States

  private bankWidth(group: LibertyGroup): number {
    const width = Number(group.values[2]?.text)
    if (Number.isInteger(width) && width >= 1 && width <= 65_536) return width
    this.warn(
      group.place,
      group.name.length,
      `${group.name} of cell ${quoted(this.name)} has no width; one bit is assumed`,
    )
    return 1
  }

  private addStates(group: LibertyGroup, width: number): void {
    for (let bit = 0; bit < width; bit++) this.openStates.push({ group, bit, width })
  }

  private readState({ group, bit }: OpenState): CellState | null {
    const isLatch = group.name.startsWith('latch')
    const context = { port: '', bit }
    const read = (name: string): CellFunction | null =>
      this.readFunction(this.attribute(group, name), context)
    const next = read(isLatch ? 'data_in' : 'next_state')
    const clock = read(isLatch ? 'enable' : 'clocked_on')
    const second = this.attribute(group, isLatch ? 'enable_also' : 'clocked_on_also')
    if (second !== undefined || ((next === null || clock === null) && !isLatch)) {
      const what = second !== undefined ? 'a second clock' : 'no next_state or no clocked_on'
      if (bit === 0) {
        this.warn(
          group.place,
          group.name.length,
          `${group.name} of cell ${quoted(this.name)} has ${what}, which is not supported: its outputs carry X`,
        )
      }
      return null
    }
    const levels: Record<string, 0 | 1> = { l: 0, h: 1 }
    const level = (name: string): 0 | 1 | 'X' =>
      levels[this.attribute(group, name)?.text.toLowerCase() ?? ''] ?? 'X'
    return {
      kind: isLatch ? 'latch' : 'flip-flop',
      next: next ?? UNKNOWN,
      clock: clock ?? UNKNOWN,
      clear: read('clear'),
      preset: read('preset'),
      both: [level('clear_preset_var1'), level('clear_preset_var2')],
    }
  }

  // Scan

  /** Scan pins as test_cell names them by signal_type, else as nextstate_type does. */
  private readScan(states: readonly CellState[]): CellScan | null {
    const test = this.group.groups.find((part) => part.name === 'test_cell')
    const types = test ? this.signalTypes(test) : this.nextStateTypes()
    const find = (...names: readonly string[]): number => {
      for (const [pin, type] of types) if (names.includes(type)) return pin
      return -1
    }
    const scanIn = find('test_scan_in', 'test_scan_in_inverted', 'scan_in')
    const scanEnable = find('test_scan_enable', 'test_scan_enable_inverted', 'scan_enable')
    if (scanIn < 0 && scanEnable < 0) return null
    const isPlain = states.length === 1 && scanIn >= 0 && scanEnable >= 0
    const shiftValue = isPlain ? this.shiftValue(states[0].next, scanIn, scanEnable) : null
    if (shiftValue === null) {
      const why = states.length > 1 ? 'it stores several bits' : 'it is no flip-flop with a data multiplexer'
      this.warn(this.group.place, 4, `cell ${quoted(this.name)} is not read as a scan flip-flop: ${why}`)
      return null
    }
    const scanOut = [...types].filter(([, type]) => type.startsWith('test_scan_out')).map(([pin]) => pin)
    return { scanIn, scanEnable, shiftValue, scanOut }
  }

  /** The value of scan enable at which the cell stores its scan-in. */
  private shiftValue(next: CellFunction, scanIn: number, scanEnable: number): 0 | 1 | null {
    if (shiftInversion(next, scanEnable, 1, scanIn) !== null) return 1
    return shiftInversion(next, scanEnable, 0, scanIn) !== null ? 0 : null
  }

  private signalTypes(test: LibertyGroup): Map<number, string> {
    const types = new Map<number, string>()
    for (const part of test.groups) {
      const type = this.attribute(part, 'signal_type')
      if (type === undefined) continue
      for (const { text } of part.values) {
        const pin = this.pinByName.get(text)
        if (pin !== undefined) types.set(pin, type.text)
      }
    }
    return types
  }

  private nextStateTypes(): Map<number, string> {
    const types = new Map<number, string>()
    this.openPins.forEach((pin, index) => {
      const type = this.pinAttribute(pin, 'nextstate_type')
      if (type !== undefined) types.set(index, type.text)
    })
    return types
  }

  // Functions

  /** The function that a value holds, null where there is none or where it is in error, which is reported. */
  private readFunction(
    value: LibertyValue | undefined,
    context: { port: string; bit: number },
  ): CellFunction | null {
    if (value === undefined || value.text.trim() === '') return null
    const result = parseFunction(value.text, (name) => this.variableOf(name, context.bit))
    if (!isFault(result)) return result
    const start = Math.min(this.source.text.length, value.place + result.at)
    const name = value.text.slice(result.at, result.at + result.length)
    const close = result.kind === 'unknown-name' ? closestName(name, this.names()) : null
    this.findings.error(
      result.kind,
      this.source,
      start,
      Math.min(this.source.text.length, start + result.length),
      `in cell ${quoted(this.name)}: ${result.message}`,
      { hint: close === null ? null : `Did you mean ${quoted(close)}?` },
    )
    return null
  }

  /** A pin's or a state's variable; of a bus, bundle or bank the bit with that number, of a single one itself. */
  private variableOf(name: string, bit: number): number {
    const pin = this.pinByName.get(name)
    if (pin !== undefined) return pin
    const port = this.ports.find((each) => each.name === name)
    if (port !== undefined) return port.pins[Math.min(bit, port.pins.length - 1)]
    let state = 0
    while (state < this.openStates.length) {
      const { group, width } = this.openStates[state]
      const output = group.values.findIndex((value, at) => at < 2 && value.text === name)
      if (output >= 0) return this.openPins.length + 2 * (state + Math.min(bit, width - 1)) + output
      state += width
    }
    return -1
  }

  private names(): string[] {
    const states = this.openStates.flatMap(({ group }) => group.values.slice(0, 2).map(textOf))
    return [...this.pinByName.keys(), ...this.ports.map((port) => port.name), ...states]
  }

  private attribute(group: LibertyGroup, name: string): LibertyValue | undefined {
    return group.attributes.find((each: LibertyAttribute) => each.name === name)?.values[0]
  }

  /** What is said about a pin, by its own group before that of its bus or bundle. */
  private pinAttribute(pin: OpenPin, name: string): LibertyValue | undefined {
    for (const group of pin.groups) {
      const value = this.attribute(group, name)
      if (value !== undefined) return value
    }
    return undefined
  }

  private warn(place: number, length: number, message: string): void {
    this.findings.warn('unsupported-construct', this.source, place, place + length, message)
  }
}

function textOf(value: LibertyValue): string {
  return value.text
}
