import { evaluateTime } from './time-expression.ts'
import type { SignalNames } from './signal-names.ts'
import type { Place, StilFile, WaveformEvent, WaveformTable } from './stil-file.ts'

/** Bits of a waveform character's class: what the tester does with a pin in a cycle. */
export const Drive = { None: 0, Low: 1, High: 2, Unknown: 3 } as const
export const DRIVE_MASK = 3
/** The pin goes from one level to the other and, as a rule, back: a clock pulse where the pin is a clock. */
export const PULSE = 4
export const COMPARE_MASK = 24
export const Compare = { None: 0, Low: 8, High: 16, Other: 24 } as const
export const DEFINED = 32

/** Waveform characters are ASCII: a row of a table has this many columns. */
export const CHARACTERS = 128

/**
 * A waveform table as arrays. Signals with the same waveforms share a row; the class of character c on signal s is
 * `flags[row[s] * CHARACTERS + c]`, its times stand in the columns at `shape[…]`.
 */
export type CompiledTable = {
  readonly name: string
  /** NaN where the file does not say. */
  readonly periodSeconds: number
  readonly row: Int32Array
  readonly flags: Uint8Array
  readonly shape: Uint32Array
  readonly shapes: readonly WaveformShape[]
}

/** Times in seconds from the start of the cycle, NaN where unknown or where there is none. */
export type WaveformShape = {
  readonly flags: number
  /** When the pin first leaves its level at rest. */
  readonly edge: number
  readonly strobe: number
  /** Levels, each from its time on: 1 low, 2 high, 3 unknown. */
  readonly levels: readonly { readonly time: number; readonly level: number }[]
}

const UNDEFINED: WaveformShape = { flags: 0, edge: NaN, strobe: NaN, levels: [] }

const LEVELS: Readonly<Record<string, number>> = { D: 1, A: 1, U: 2, B: 2, Z: 3, F: 3, N: 3, '?': 3 }
const COMPARES: Readonly<Record<string, number>> = {
  L: Compare.Low,
  l: Compare.Low,
  H: Compare.High,
  h: Compare.High,
  T: Compare.Other,
  t: Compare.Other,
  V: Compare.Other,
  v: Compare.Other,
}

/** Compiles a table with all that it inherits; broken references in it are findings of `names`. */
export function compileTable(
  table: WaveformTable,
  tables: ReadonlyMap<string, WaveformTable>,
  file: StilFile,
  names: SignalNames,
): CompiledTable {
  const rows = new RowBuilder(file.signals.names.length)
  const seen = new Set<WaveformTable>()
  const add = (from: WaveformTable): void => {
    if (seen.has(from)) return
    seen.add(from)
    for (const parent of from.inherits) {
      const inherited = tables.get(parent)
      if (inherited !== undefined) add(inherited)
    }
    for (const { reference, entries } of from.waveforms) {
      const members = membersOf(reference, names)
      for (const { characters, events } of entries) {
        rows.add(members, characters, (at) => shapeOf(events, at, file.specs))
      }
    }
  }
  add(table)
  return rows.finish(table.name, evaluateTime(table.period, file.specs, NaN))
}

/** Returns the signals that some waveform pulses, each with its level at rest. */
export function pulsingSignals(file: StilFile, names: SignalNames): Map<number, number> {
  const resting = new Map<number, number>()
  for (const { tables } of file.timings.values()) {
    for (const { waveforms } of tables.values()) {
      for (const { reference, entries } of waveforms) {
        const rest = entries
          .flatMap(({ characters, events }) =>
            Array.from(characters, (_, at) => shapeOf(events, at, file.specs).flags),
          )
          .find((flags) => (flags & PULSE) !== 0)
        if (rest === undefined) continue
        for (const signal of membersOf(reference, names)) {
          if (!resting.has(signal)) resting.set(signal, rest & DRIVE_MASK)
        }
      }
    }
  }
  return resting
}

function membersOf(reference: Place, names: SignalNames): Int32Array {
  const text = reference.source.text.slice(reference.span.start, reference.span.end)
  return names.find(text.startsWith("'") ? text : text.replaceAll('"', ''), reference)
}

/** What waveform characters mean where a file has no table: 0 1 N Z drive, P pulses, L H X T compare. */
export function customaryTable(nSignals: number): CompiledTable {
  const rows = new RowBuilder(nSignals)
  const all = Int32Array.from({ length: nSignals }, (_, signal) => signal)
  const event = (...actions: string[]): WaveformEvent => ({ time: '', actions })
  const add = (characters: string, ...events: WaveformEvent[]): void => {
    rows.add(all, characters, (at) => shapeOf(events, at, new Map()))
  }
  add('01NZ', event('D', 'U', 'N', 'Z'))
  add('P', event('D'), event('U'), event('D'))
  add('LHXT', event('L', 'H', 'X', 'T'))
  return rows.finish('', NaN)
}

class RowBuilder {
  private readonly row: Int32Array
  private readonly rows: Uint32Array[] = [new Uint32Array(CHARACTERS)]
  private readonly shapes: WaveformShape[] = [UNDEFINED, { ...UNDEFINED, flags: DEFINED }]

  constructor(nSignals: number) {
    this.row = new Int32Array(nSignals)
    // A signal that was never given a value is in character 0, which is defined and does nothing.
    this.rows[0][0] = 1
  }

  add(members: Int32Array, characters: string, shapeAt: (at: number) => WaveformShape): void {
    const first = this.shapes.length
    for (let at = 0; at < characters.length; at++) this.shapes.push(shapeAt(at))
    const successor = new Map<number, number>()
    for (const signal of members) {
      const old = this.row[signal] ?? 0
      let row = successor.get(old)
      if (row === undefined) {
        row = this.rows.length
        successor.set(old, row)
        const shapes = this.rows[old].slice()
        for (let at = 0; at < characters.length; at++) {
          const code = characters.charCodeAt(at)
          if (code < CHARACTERS) shapes[code] = first + at
        }
        this.rows.push(shapes)
      }
      this.row[signal] = row
    }
  }

  finish(name: string, periodSeconds: number): CompiledTable {
    const used = new Map<number, number>()
    const row = this.row.map((old) => {
      const known = used.get(old)
      if (known !== undefined) return known
      used.set(old, used.size)
      return used.size - 1
    })
    const shape = new Uint32Array(used.size * CHARACTERS)
    for (const [old, now] of used) shape.set(this.rows[old], now * CHARACTERS)
    const flags = Uint8Array.from(shape, (at) => this.shapes[at].flags)
    return { name, periodSeconds, row, flags, shape, shapes: this.shapes }
  }
}

/** The shape of the character at that place of a list, from the events of the list. */
function shapeOf(
  events: readonly WaveformEvent[],
  at: number,
  specs: ReadonlyMap<string, string>,
): WaveformShape {
  const levels: { time: number; level: number }[] = []
  let compare: number = Compare.None
  let strobe = NaN
  let edge = NaN
  let pulses = false
  let time = NaN
  let previous = 0
  for (const event of events) {
    if (event.time !== '') time = evaluateTime(event.time, specs, previous)
    previous = time
    const action = event.actions[event.actions.length === 1 ? 0 : at] ?? '?'
    const level = LEVELS[action]
    if (level !== undefined) {
      const before = levels.at(-1)?.level
      if (before === level) continue
      if (before !== undefined && before + level === Drive.Low + Drive.High) {
        if (!pulses) edge = time
        pulses = true
      }
      levels.push({ time, level })
    } else if (compare === Compare.None && COMPARES[action] !== undefined) {
      compare = COMPARES[action]
      strobe = time
    }
  }
  const driven = levels.filter(({ level }) => level !== Drive.Unknown)
  const drive = driven[0]?.level ?? (levels.length > 0 ? Drive.Unknown : Drive.None)
  return { flags: drive | (pulses ? PULSE : 0) | compare | DEFINED, edge, strobe, levels }
}
