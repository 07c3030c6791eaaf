import {
  WORDS_PER_BLOCK,
  complement,
  type BitPlane,
  type PatternBurst,
  type PatternSet,
} from '../../simulate/pattern-set.ts'
import {
  CHARACTERS,
  COMPARE_MASK,
  Compare,
  DRIVE_MASK,
  Drive,
  PULSE,
  type CompiledTable,
} from './compile-table.ts'
import { GrowingPlane, wordInBlock } from './growing-plane.ts'
import type { PinMap } from './match-netlist.ts'
import type { PatternRunner } from './run-patterns.ts'
import type { Place } from './stil-file.ts'
import { firstCompare, writeLoad, writeUnload, type PassedData, type PatternColumn } from './scan-data.ts'

/** Why a pattern counts for time and not for coverage. */
export type TimeOnlyReason =
  'more than one capture' | 'other clocks than the scan clocks' | 'clocks at different times'

export type AssemblyCounts = {
  /** Cycles before the first pattern of each burst, and after the last. */
  openingCycles: number
  closingCycles: number
  timeOnly: Map<TimeOnlyReason, { count: number; first: number }>
  /** Patterns whose flip-flops were not loaded in this pattern and are taken as X. */
  stateNotLoaded: number
  /** Expected values that were not used, by why. */
  unusedExpects: { afterCapture: number; otherInputs: number; threeState: number }
  /** Unloads of flip-flops whose clock did not pulse: they show what was loaded, and are not compared. */
  heldUnloads: number
  /** Loads whose data are shorter or longer than their chain. */
  wrongLengths: Map<string, { found: number; expected: number; place: Place }>
  /** Names of inputs without a value when a pattern captured. */
  inputsWithoutValue: Set<number>
  /** Levels seen, by signal: 1 low, 2 high, 4 unknown; at shifts and when patterns compare or capture. */
  shiftLevels: Uint8Array
  frameLevels: Uint8Array
  /** 1 where a level at a frame was pattern data, not a value that a procedure sets itself. */
  frameData: Uint8Array
  pulsedInShift: Uint8Array
  pulsedInCapture: Uint8Array
}

const NO_DATA: PassedData = { text: '', from: 0, stride: 1, count: 0 }

/** Words of all planes together that a set may have: half a gigabyte. */
const MAX_PLANE_WORDS = 1 << 27

const MAX_CYCLES = 0xffffffff

/**
 * Turns the cycles and shifts of a run into patterns. A pattern starts with a load, which is also the unload of the
 * pattern before; without scan it is one vector that compares, with the vectors before it. Its values are those of the
 * inputs when it captures, or, without a capture, when it first compares.
 *
 * Bit order: the first character of scan-in data ends in the cell next to scan-out, and the first character of scan-out
 * data shows that cell.
 */
export class PatternAssembler {
  nPatterns = 0
  /** Compares and loads so far; loops look at it. */
  events = 0
  /** Captures of the open pattern. */
  captures = 0
  readonly counts: AssemblyCounts

  private readonly pins: PinMap
  private readonly maxPatterns: number
  private readonly nInputs: number
  private readonly nOutputs: number
  private readonly value: GrowingPlane
  private readonly known: GrowingPlane
  private readonly expected: GrowingPlane
  private readonly care: GrowingPlane
  private readonly cycles: number[] = []
  private readonly timeOnly: number[] = []
  private readonly withoutCapture: number[] = []
  private readonly dependent: number[] = []
  private readonly bursts: PatternBurst[] = []
  private burst = { name: '', first: 0, besides: 0 }

  private scanOpen = false
  private loading = false
  /** Whether the call that loads has come to its Shift. */
  private hasShifted = false
  private loadMark = 0
  private boundary = 0
  private sawBoundary = false
  private strobed = false
  private reason: TimeOnlyReason | null = null
  private frame: Uint8Array | null = null
  private readonly levels: Uint8Array
  /** Scan-in data of the last shift, decoded once it is known how many pulses followed. */
  private load: { readonly data: PassedData; readonly table: CompiledTable }[] = []
  private loadPending = false
  private shiftsBefore = 0
  private shiftsAfter = 0
  private readonly shiftState: Uint8Array
  private shiftClocks: Set<number> | null = null
  /** Clocks that pulsed in the open pattern's capture, where others did not; null where all did. */
  private captured: Set<number> | null = null
  private readonly flipFlopClocks: Set<number>
  private readonly clockLevel: Uint8Array
  private clockedWithoutLoad = false
  private readonly pulsing: number[] = []
  private run: PatternRunner | null = null

  constructor(pins: PinMap, nSignals: number, maxPatterns: number = Infinity) {
    this.pins = pins
    this.maxPatterns = maxPatterns
    this.nInputs = pins.inputSignal.length
    this.nOutputs = pins.outputSignal.length
    this.value = new GrowingPlane(this.nInputs + pins.nFlipFlops)
    this.known = new GrowingPlane(this.nInputs + pins.nFlipFlops)
    this.expected = new GrowingPlane(this.nOutputs + pins.nFlipFlops)
    this.care = new GrowingPlane(this.nOutputs + pins.nFlipFlops)
    this.levels = new Uint8Array(this.nInputs)
    this.shiftState = new Uint8Array(nSignals)
    this.flipFlopClocks = new Set(pins.clockOf?.filter((signal) => signal >= 0))
    this.clockLevel = new Uint8Array(pins.clocks.length)
    this.counts = {
      openingCycles: 0,
      closingCycles: 0,
      timeOnly: new Map(),
      stateNotLoaded: 0,
      unusedExpects: { afterCapture: 0, otherInputs: 0, threeState: 0 },
      heldUnloads: 0,
      wrongLengths: new Map(),
      inputsWithoutValue: new Set(),
      shiftLevels: new Uint8Array(nSignals),
      frameLevels: new Uint8Array(nSignals),
      frameData: new Uint8Array(nSignals),
      pulsedInShift: new Uint8Array(nSignals),
      pulsedInCapture: new Uint8Array(nSignals),
    }
  }

  get hasEnough(): boolean {
    return this.nPatterns >= this.maxPatterns
  }

  /** True where the set would need more memory than a reading may take. */
  get isTooLarge(): boolean {
    const rows = 2 * (this.nInputs + this.nOutputs + 2 * this.pins.nFlipFlops)
    return (rows * this.nPatterns) / 32 > MAX_PLANE_WORDS
  }

  attach(run: PatternRunner): void {
    this.run = run
  }

  beginBurst(name: string): void {
    this.burst = { name, first: this.nPatterns, besides: this.cyclesBesides() }
    this.boundary = this.now()
    this.sawBoundary = false
    this.shiftClocks = null
    this.clockedWithoutLoad = false
    this.clockLevel.fill(0)
  }

  endBurst(): void {
    const closing = this.now() - this.boundary
    if (this.scanOpen && !this.strobed && this.nPatterns > this.burst.first) {
      this.discard()
      this.counts.closingCycles += closing
    } else if (this.scanOpen) {
      this.closePattern(this.now())
    } else {
      this.counts.closingCycles += closing
    }
    this.scanOpen = false
    const count = this.nPatterns - this.burst.first
    if (count === 0) return
    const onceCycles = this.cyclesBesides() - this.burst.besides
    this.bursts.push({ name: this.burst.name, first: this.burst.first, count, onceCycles })
  }

  private cyclesBesides(): number {
    return this.counts.openingCycles + this.counts.closingCycles
  }

  beginLoad(): void {
    this.loading = true
    this.hasShifted = false
    this.loadMark = this.now()
    this.shiftsBefore = 0
  }

  endLoad(): void {
    this.decodeLoad()
    this.loading = false
  }

  addCaptures(more: number): void {
    if (more <= 0) return
    this.captures += more
    this.timeOnlyFor('more than one capture')
  }

  /** One vector outside of Shift. */
  cycle(run: PatternRunner): void {
    const clocked = this.clockEdges(run)
    if (clocked && this.isShiftPulse(run)) {
      if (run.compares > 0 && this.captures === 1 && this.shiftsBefore === 0) this.strobeAfterCapture(run)
      if (this.hasShifted) this.shiftsAfter++
      else this.shiftsBefore++
      return
    }
    if (run.compares > 0) this.strobe(run, clocked)
    if (clocked) this.capture(run)
    if (!this.scanOpen && this.strobed) this.closePattern(this.now())
  }

  /** A shift of that many rounds; `shifted` are the signals that take a character a round from their data. */
  shift(run: PatternRunner, length: number, vectors: number, shifted: readonly number[]): void {
    this.events++
    this.clockEdges(run)
    const start = this.loading ? this.loadMark : this.now() - length * vectors
    if (this.scanOpen) {
      this.decodeLoad()
      this.unload(run)
      this.closePattern(start)
    } else if (!this.sawBoundary) {
      this.counts.openingCycles += start - this.boundary
      this.sawBoundary = true
      this.boundary = start
    }
    this.openPattern()
    this.scanOpen = true
    this.clockedWithoutLoad = false
    this.shiftsBefore = 0
    this.shiftsAfter = 0
    this.hasShifted = true
    this.loadPending = true
    this.load = this.pins.chains.map(({ name, scanInSignal, length: wanted }) => {
      const isPassed = scanInSignal >= 0 && shifted.includes(scanInSignal)
      const data = isPassed ? run.passed(scanInSignal) : NO_DATA
      if (data.count > 0 && wanted !== null && data.count !== wanted) {
        this.counts.wrongLengths.set(name, { found: data.count, expected: wanted, place: run.place })
      }
      return { data, table: run.table }
    })
    this.shiftState.set(run.state)
    this.noteShift(run, shifted)
  }

  /** Returns the set, with the cycles of each pattern; null where there is no pattern. */
  finish(): PatternSet | null {
    const { nPatterns } = this
    if (nPatterns === 0) return null
    const value = this.value.finish(nPatterns)
    const known = this.known.finish(nPatterns)
    const expected = { value: this.expected.finish(nPatterns), care: this.care.finish(nPatterns) }
    const timeOnly = this.flags(this.timeOnly)
    const withoutCapture = this.flags(this.withoutCapture)
    return {
      nPatterns,
      value,
      unknown: complement(known, nPatterns),
      expected,
      observed: this.observed(expected.care),
      cycles: Uint32Array.from(this.cycles),
      timeOnly,
      withoutCapture,
      dependsOnPrevious: this.flags(this.dependent),
      bursts: this.bursts,
    }
  }

  private flags(patterns: readonly number[]): Uint8Array | null {
    if (patterns.length === 0) return null
    const flags = new Uint8Array(this.nPatterns)
    for (const pattern of patterns) flags[pattern] = 1
    return flags
  }

  /** What is compared, less the unloads that only show what was loaded, since no fault simulation tells of those. */
  private observed(care: BitPlane): BitPlane {
    if (this.withoutCapture.length === 0) return care
    const words = care.words.slice()
    for (const pattern of this.withoutCapture) {
      const clear = ~(1 << (pattern & 31))
      for (let row = this.nOutputs; row < care.rows; row++) {
        words[row * care.wordsPerRow + (pattern >>> 5)] &= clear
      }
    }
    return { rows: care.rows, wordsPerRow: care.wordsPerRow, words }
  }

  private now(): number {
    return this.run?.counts.cycles ?? 0
  }

  private openPattern(): void {
    this.nPatterns++
    this.captures = 0
    this.strobed = false
    this.reason = null
    this.frame = null
    this.captured = null
  }

  private closePattern(end: number): void {
    const pattern = this.nPatterns - 1
    this.decodeLoad()
    this.cycles[pattern] = this.checkedCycles(end - this.boundary)
    this.boundary = end
    if (this.scanOpen) {
      if (this.captures === 0) this.withoutCapture.push(pattern)
    } else {
      this.counts.stateNotLoaded++
      if (this.clockedWithoutLoad) this.dependent.push(pattern)
      this.strobed = false
    }
    if (this.reason !== null) {
      this.timeOnly.push(pattern)
      const seen = this.counts.timeOnly.get(this.reason)
      if (seen === undefined) this.counts.timeOnly.set(this.reason, { count: 1, first: pattern })
      else seen.count++
      this.care.clear(pattern)
      this.expected.clear(pattern)
    }
    this.captures = 0
    this.sawBoundary = true
  }

  private checkedCycles(cycles: number): number {
    if (cycles > MAX_CYCLES && this.run !== null) {
      const { findings, place } = this.run
      const message = `pattern ${this.nPatterns} takes ${cycles} cycles; at most ${MAX_CYCLES} are counted`
      findings.report('limit', place.source, place.span, message)
    }
    return cycles
  }

  private discard(): void {
    const pattern = this.nPatterns - 1
    this.loadPending = false
    this.value.clear(pattern)
    this.known.clear(pattern)
    this.nPatterns--
  }

  private timeOnlyFor(reason: TimeOnlyReason): void {
    this.reason ??= reason
  }

  /** Fills `pulsing` with the clocks that leave their rest level in this cycle; true where any does. */
  private clockEdges(run: PatternRunner): boolean {
    const { clocks } = this.pins
    this.pulsing.length = 0
    for (let at = 0; at < clocks.length; at++) {
      const { signal, rest } = clocks[at]
      const flag = run.table.flags[run.table.row[signal] * CHARACTERS + run.state[signal]]
      if ((flag & PULSE) !== 0) this.pulsing.push(signal)
      const level = flag & DRIVE_MASK
      const active = (flag & PULSE) === 0 && rest !== null && (level === Drive.Low || level === Drive.High)
      const isActive = active && level !== (rest === 1 ? Drive.High : Drive.Low) ? 1 : 0
      if (isActive === 1 && this.clockLevel[at] === 0) this.pulsing.push(signal)
      this.clockLevel[at] = isActive
    }
    return this.pulsing.length > 0
  }

  /**
   * Whether a pulse outside of Shift moves the chains on: in a procedure that shifts, before Shift or right after it, with
   * the scan enables, or, where they are not known, all pins that drive, as they are in Shift.
   */
  private isShiftPulse(run: PatternRunner): boolean {
    if (!this.loading || (this.hasShifted && !this.loadPending)) return false
    const { scanEnables, steadyInputs } = this.pins
    if (scanEnables.length > 0) {
      return scanEnables.every(({ signal, capture }) => {
        const level = run.table.flags[run.table.row[signal] * CHARACTERS + run.state[signal]] & DRIVE_MASK
        return level === (capture === 1 ? Drive.Low : Drive.High)
      })
    }
    return this.hasShifted && steadyInputs.every((signal) => run.state[signal] === this.shiftState[signal])
  }

  private strobe(run: PatternRunner, clocked: boolean): void {
    this.events++
    if (!this.scanOpen && !this.strobed) {
      if (!this.sawBoundary) this.sawBoundary = true
      this.openPattern()
    }
    if (this.captures > 0) {
      this.strobeAfterCapture(run)
      return
    }
    this.strobed = true
    const time = clocked ? this.edgeTime(run) : NaN
    this.readLevels(run)
    if (this.frame === null) this.keepFrame(run)
    else if (!this.sameFrame()) {
      this.counts.unusedExpects.otherInputs += run.compares
      return
    }
    const pattern = this.nPatterns - 1
    const expected = this.expected.block(pattern)
    const care = this.care.block(pattern)
    const bit = 1 << (pattern & 31)
    const word = wordInBlock(pattern)
    const { outputSignal } = this.pins
    const { table, state } = run
    for (let row = 0; row < outputSignal.length; row++) {
      const signal = outputSignal[row]
      if (signal < 0) continue
      const at = table.row[signal] * CHARACTERS + state[signal]
      const compare = table.flags[at] & COMPARE_MASK
      if (compare === Compare.None) continue
      if (compare === Compare.Other) {
        this.counts.unusedExpects.threeState++
        continue
      }
      if (clocked && table.shapes[table.shape[at]].strobe >= time) {
        this.counts.unusedExpects.afterCapture++
        continue
      }
      care[row * WORDS_PER_BLOCK + word] |= bit
      if (compare === Compare.High) expected[row * WORDS_PER_BLOCK + word] |= bit
    }
  }

  /** After one capture the scan-outs show their last cells' new values; other outputs depend on them and are not used. */
  private strobeAfterCapture(run: PatternRunner): void {
    const pattern = this.nPatterns - 1
    const { table, state } = run
    let used = 0
    if (this.captures === 1 && this.scanOpen) {
      for (const chain of this.pins.chains) {
        if (chain.scanOutSignal < 0 || chain.flipFlop.length === 0) continue
        const code = state[chain.scanOutSignal]
        const compare = table.flags[table.row[chain.scanOutSignal] * CHARACTERS + code] & COMPARE_MASK
        if (compare === Compare.None) continue
        used++
        const data = { text: String.fromCharCode(code), from: 0, stride: 1, count: 1 }
        const column = this.column(this.expected, this.care, this.nOutputs, pattern)
        this.countUnused(writeUnload(chain, data, table, 0, column, this.holds()))
      }
    }
    this.counts.unusedExpects.afterCapture += run.compares - used
  }

  private capture(run: PatternRunner): void {
    if (!this.scanOpen) {
      this.clockedWithoutLoad = true
      return
    }
    this.captures++
    for (const signal of this.pulsing) this.counts.pulsedInCapture[signal] = 1
    if (this.captures > 1) {
      this.timeOnlyFor('more than one capture')
      return
    }
    if (!this.areCaptureClocks()) this.timeOnlyFor('other clocks than the scan clocks')
    if (new Set(this.pulsing.map((signal) => edgeOf(run, signal))).size > 1) {
      this.timeOnlyFor('clocks at different times')
    }
    this.readLevels(run)
    if (this.frame === null) this.keepFrame(run)
    else if (!this.sameFrame()) {
      const pattern = this.nPatterns - 1
      this.counts.unusedExpects.otherInputs += this.countCares(pattern)
      this.care.clear(pattern, this.nOutputs)
      this.expected.clear(pattern, this.nOutputs)
      this.keepFrame(run)
    }
  }

  /**
   * Whether one time frame shows a capture with the clocks that pulse. Where the netlist tells each flip-flop's clock, the
   * others hold what was loaded; where it does not, the clocks must be those that shift.
   */
  private areCaptureClocks(): boolean {
    const { pulsing, flipFlopClocks, shiftClocks } = this
    if (this.pins.clockOf === null) {
      return (
        shiftClocks === null ||
        (pulsing.length === shiftClocks.size && pulsing.every((signal) => shiftClocks.has(signal)))
      )
    }
    if (pulsing.length < flipFlopClocks.size) this.captured = new Set(pulsing)
    return pulsing.every((signal) => flipFlopClocks.has(signal))
  }

  private countCares(pattern: number): number {
    const block = this.care.block(pattern)
    const word = wordInBlock(pattern)
    let count = 0
    for (let row = 0; row < this.nOutputs; row++) {
      count += (block[row * WORDS_PER_BLOCK + word] >>> (pattern & 31)) & 1
    }
    return count
  }

  /** Levels of the inputs in this cycle: a clock at rest, another pin that pulses as it is at the strobe or the edge. */
  private readLevels(run: PatternRunner): void {
    const { inputSignal, isClock, restLevel } = this.pins
    const { table, state } = run
    let time = NaN
    for (let row = 0; row < inputSignal.length; row++) {
      const signal = inputSignal[row]
      if (signal < 0) {
        this.levels[row] = Drive.Unknown
        continue
      }
      if (isClock[signal] === 1 && restLevel[signal] !== Drive.None) {
        this.levels[row] = restLevel[signal]
        continue
      }
      const at = table.row[signal] * CHARACTERS + state[signal]
      const flag = table.flags[at]
      let level = flag & DRIVE_MASK
      if ((flag & PULSE) !== 0 && isClock[signal] === 0) {
        if (Number.isNaN(time)) time = this.momentOf(run)
        level = levelAt(table, at, time)
      }
      this.levels[row] = level === Drive.None ? Drive.Unknown : level
    }
  }

  /** When inputs count in this cycle: at the first strobe, or at the clock edge. */
  private momentOf(run: PatternRunner): number {
    let moment = Infinity
    const { table, state } = run
    if (run.compares > 0) {
      for (const signal of this.pins.outputSignal) {
        if (signal < 0) continue
        const { strobe } = table.shapes[table.shape[table.row[signal] * CHARACTERS + state[signal]]]
        if (strobe < moment) moment = strobe
      }
    }
    if (moment === Infinity) moment = this.edgeTime(run)
    return moment
  }

  private edgeTime(run: PatternRunner): number {
    let earliest = Infinity
    for (const signal of this.pulsing) {
      const edge = edgeOf(run, signal)
      if (edge < earliest) earliest = edge
    }
    return earliest === Infinity ? NaN : earliest
  }

  private sameFrame(): boolean {
    const { frame, levels } = this
    if (frame === null) return false
    for (let row = 0; row < levels.length; row++) if (frame[row] !== levels[row]) return false
    return true
  }

  /** Makes the levels just read the pattern's input values. */
  private keepFrame(run: PatternRunner): void {
    const pattern = this.nPatterns - 1
    this.decodeLoad()
    if (this.frame === null) this.noteFrame(run)
    this.frame ??= new Uint8Array(this.nInputs)
    this.frame.set(this.levels)
    const value = this.value.block(pattern)
    const known = this.known.block(pattern)
    const bit = 1 << (pattern & 31)
    const word = wordInBlock(pattern)
    for (let row = 0; row < this.nInputs; row++) {
      const at = row * WORDS_PER_BLOCK + word
      const level = this.levels[row]
      value[at] = level === Drive.High ? value[at] | bit : value[at] & ~bit
      known[at] = level === Drive.High || level === Drive.Low ? known[at] | bit : known[at] & ~bit
      const signal = this.pins.inputSignal[row]
      if (signal >= 0 && run.state[signal] === 0 && this.pins.isScanPin[signal] === 0) {
        this.counts.inputsWithoutValue.add(signal)
      }
    }
  }

  /** Writes the scan-in data of the last shift to the flip-flops' rows of the open pattern. */
  private decodeLoad(): void {
    if (!this.loadPending) return
    this.loadPending = false
    const pattern = this.nPatterns - 1
    const column = this.column(this.value, this.known, this.nInputs, pattern)
    this.load.forEach(({ data, table }, at) => {
      if (data.count > 0) writeLoad(this.pins.chains[at], data, table, this.shiftsAfter, column)
    })
  }

  /** Writes what this shift expects at the scan-outs to the pattern that it unloads. */
  private unload(run: PatternRunner): void {
    if (this.reason !== null) return
    const column = this.column(this.expected, this.care, this.nOutputs, this.nPatterns - 1)
    const { table } = run
    for (const chain of this.pins.chains) {
      const signal = chain.scanOutSignal
      if (signal < 0 || chain.flipFlop.length === 0) continue
      const data = run.passed(signal)
      const code = firstCompare(data, table, signal)
      if (code < 0) continue
      const { strobe } = table.shapes[table.shape[table.row[signal] * CHARACTERS + code]]
      const shifts = this.shiftsBefore + (strobe >= this.lastEdge(run) ? 1 : 0)
      this.countUnused(writeUnload(chain, data, table, shifts, column, this.holds()))
    }
  }

  private column(ones: GrowingPlane, known: GrowingPlane, firstRow: number, pattern: number): PatternColumn {
    const word = wordInBlock(pattern)
    return {
      ones: ones.block(pattern),
      known: known.block(pattern),
      firstRow,
      word,
      bit: 1 << (pattern & 31),
    }
  }

  /** Tells flip-flops whose clock rested in a capture of some clocks; null where all clocks captured. */
  private holds(): ((flipFlop: number) => boolean) | null {
    const { captured } = this
    const { clockOf } = this.pins
    return captured === null || clockOf === null ? null : (flipFlop) => !captured.has(clockOf[flipFlop])
  }

  private countUnused({ others, held }: { others: number; held: number }): void {
    this.counts.unusedExpects.threeState += others
    this.counts.heldUnloads += held
  }

  private lastEdge(run: PatternRunner): number {
    let latest = -Infinity
    for (const signal of this.pulsing) {
      const edge = edgeOf(run, signal)
      if (edge > latest) latest = edge
    }
    return latest === -Infinity ? NaN : latest
  }

  private noteShift(run: PatternRunner, shifted: readonly number[]): void {
    if (this.pulsing.length > 0) {
      this.shiftClocks ??= new Set()
      for (const signal of this.pulsing) {
        this.shiftClocks.add(signal)
        this.counts.pulsedInShift[signal] = 1
      }
    }
    this.noteLevels(run, this.counts.shiftLevels)
    for (const signal of shifted) this.counts.shiftLevels[signal] |= 4
  }

  private noteFrame(run: PatternRunner): void {
    if (!this.scanOpen) return
    const { frameLevels, frameData } = this.counts
    this.noteLevels(run, frameLevels)
    for (let signal = 0; signal < frameData.length; signal++) frameData[signal] |= run.isData[signal]
  }

  private noteLevels(run: PatternRunner, seen: Uint8Array): void {
    const { table, state } = run
    for (let signal = 0; signal < state.length; signal++) {
      const level = table.flags[table.row[signal] * CHARACTERS + state[signal]] & DRIVE_MASK
      seen[signal] |= level === Drive.Low ? 1 : level === Drive.High ? 2 : 4
    }
  }
}

/** When a clock leaves its level at rest: within the cycle, or, where it holds the other level, as it takes that. */
function edgeOf(run: PatternRunner, signal: number): number {
  const { table, state } = run
  const { edge, levels } = table.shapes[table.shape[table.row[signal] * CHARACTERS + state[signal]]]
  return Number.isNaN(edge) && levels.length > 0 ? levels[0].time : edge
}

function levelAt(table: CompiledTable, at: number, time: number): number {
  let found: number = Drive.Unknown
  for (const { time: from, level } of table.shapes[table.shape[at]].levels) if (from <= time) found = level
  return found
}
