import { quoted } from '../../source/finding-list.ts'
import type { ReadingProgress } from '../../source/reading-progress.ts'
import type { PatternAssembler } from './assemble-patterns.ts'
import {
  CHARACTERS,
  COMPARE_MASK,
  Compare,
  DEFINED,
  compileTable,
  customaryTable,
  type CompiledTable,
} from './compile-table.ts'
import { Lexer } from './lexer.ts'
import { StatementReader } from './read-statements.ts'
import type { PassedData } from './scan-data.ts'
import type { SignalNames } from './signal-names.ts'
import type { Assignment, Statement } from './statement.ts'
import { BrokenStatement, ReadingStopped, type StilFindings } from './stil-findings.ts'
import type { Burst, PatternBlock, Place, Procedure, StilFile, Timing } from './stil-file.ts'

const HASH = 35
const PERCENT = 37

const MAX_CALL_DEPTH = 32
/** How many statements loops may run one by one; loops that neither compare nor load are counted at once. */
const MAX_UNROLLED = 2_000_000
const MAX_BURST_ENTRIES = 100_000
const PROGRESS_STEP = 4_000_000

const NO_TIMING: Timing = { domain: '', tables: new Map() }

/** What the tester's cycles of a run add up to. */
export type RunCounts = {
  cycles: number
  /** Seconds of the cycles whose period the file gives, and how many those are. */
  seconds: number
  timedCycles: number
  /** Vectors as the tester stores them: a repeated block once, a shift as one. */
  vectors: number
  /** Vector statements run, a shift as one each time, those in loops each time. */
  statements: number
  /** Cycles of shifting; the others hold or capture. */
  shiftCycles: number
  hasMatchLoop: boolean
}

/**
 * Runs the patterns that the file's PatternExec applies, statement by statement off the text, and tells the assembler of
 * each cycle and each shift. Keeps what IEEE 1450-1999 says a vector inherits: every signal's waveform character until it
 * is given another, a procedure's signals undefined at its start and restored after it, a macro's not.
 */
export class PatternRunner {
  readonly findings: StilFindings
  /** The waveform character of each signal; 0 where none was given. */
  readonly state: Uint8Array
  /** 1 where that character is pattern data: passed by a call, or given by a vector of the pattern itself. */
  readonly isData: Uint8Array
  table: CompiledTable
  /** How many signals compare in the present state. */
  compares = 0
  /** Data passed for each signal: characters at text, from, from + stride …, that many; −1 where none were passed. */
  private readonly argumentText: string[]
  private readonly argumentFrom: Int32Array
  private readonly argumentStride: Int32Array
  private readonly argumentLeft: Int32Array
  readonly counts: RunCounts = {
    cycles: 0,
    seconds: 0,
    timedCycles: 0,
    vectors: 0,
    statements: 0,
    shiftCycles: 0,
    hasMatchLoop: false,
  }
  /** Where the statement that runs stands. */
  place: Place

  private readonly file: StilFile
  private readonly names: SignalNames
  private readonly assembler: PatternAssembler
  private readonly onProgress: ReadingProgress | undefined
  private readonly fixed: Uint8Array
  private undefineds = 0
  private timing: Timing = NO_TIMING
  private readonly compiled = new Map<string, CompiledTable>()
  private readonly customary: CompiledTable
  private domains: Burst['domains'] = { groups: '', procedures: '', macros: '' }
  private repeating = false
  private unrolled = 0
  private entries = 0
  private charactersDone = 0
  private charactersTotal = 0

  constructor(
    file: StilFile,
    names: SignalNames,
    findings: StilFindings,
    assembler: PatternAssembler,
    place: Place,
    onProgress: ReadingProgress | undefined,
  ) {
    const nSignals = file.signals.names.length
    this.file = file
    this.names = names
    this.findings = findings
    this.assembler = assembler
    this.place = place
    this.onProgress = onProgress
    this.state = new Uint8Array(nSignals)
    this.isData = new Uint8Array(nSignals)
    this.fixed = new Uint8Array(nSignals)
    this.argumentText = new Array<string>(nSignals).fill('')
    this.argumentFrom = new Int32Array(nSignals)
    this.argumentStride = new Int32Array(nSignals)
    this.argumentLeft = new Int32Array(nSignals).fill(-1)
    this.customary = customaryTable(nSignals)
    this.table = this.customary
    for (const block of file.patterns.values()) this.charactersTotal += block.end - block.start
  }

  /** Runs everything, or stops where the assembler has enough. */
  run(): void {
    const [exec, ...others] = this.file.execs
    if (exec !== undefined) {
      if (others.length > 0) {
        this.findings.caution(
          'ignored',
          exec.place.source,
          others[0]?.place.span ?? exec.place.span,
          'PatternExec',
          `${others.length + 1} PatternExec blocks; the first alone is read`,
        )
      }
      this.chooseTiming(exec.timing, exec.place)
      if (exec.burst !== null) return this.runBurst(exec.burst.name, exec.burst.place, 0)
    } else this.chooseTiming('', this.place)
    const blocks = [...this.file.patterns.values()]
    if (blocks.length === 0) return
    this.findings.caution(
      'missing-signal',
      this.place.source,
      this.place.span,
      'no burst',
      'no PatternExec names a burst; all patterns are read in the order of the file',
    )
    this.assembler.beginBurst(blocks[0]?.name ?? '')
    for (const block of blocks) this.runPattern(block)
    this.assembler.endBurst()
  }

  /** What is left of the data passed for a signal. */
  passed(signal: number): PassedData {
    return {
      text: this.argumentText[signal],
      from: this.argumentFrom[signal],
      stride: this.argumentStride[signal],
      count: Math.max(0, this.argumentLeft[signal]),
    }
  }

  private chooseTiming(name: string, place: Place): void {
    const timings = [...this.file.timings.values()]
    const named = this.file.timings.get(name)
    if (named === undefined && name !== '') {
      this.findings.report(
        'unknown-name',
        place.source,
        place.span,
        `PatternExec names the timing ${quoted(name)}, which is not in the file`,
        `Timing blocks here: ${[...this.file.timings.keys()].slice(0, 10).map(quoted).join(', ') || 'none'}.`,
      )
    }
    this.timing = named ?? timings[0] ?? NO_TIMING
    this.names.useDomain(this.timing.domain)
  }

  private runBurst(name: string, place: Place, depth: number): void {
    const burst = this.file.bursts.get(name)
    if (burst === undefined) {
      this.findings.report(
        'unknown-name',
        place.source,
        place.span,
        `there is no PatternBurst ${quoted(name)}`,
        `Bursts here: ${[...this.file.bursts.keys()].slice(0, 10).map(quoted).join(', ') || 'none'}.`,
      )
      return
    }
    if (depth > MAX_CALL_DEPTH) {
      this.findings.report('limit', place.source, place.span, 'bursts nested too deep, or in a circle')
      throw new ReadingStopped()
    }
    let open = false
    for (const entry of burst.entries) {
      if (++this.entries > MAX_BURST_ENTRIES) {
        const { source, span } = entry.place
        this.findings.report('limit', source, span, `more than ${MAX_BURST_ENTRIES} patterns in the bursts`)
        throw new ReadingStopped()
      }
      const block = this.file.patterns.get(entry.name)
      if (block !== undefined) {
        this.domains = burst.domains
        this.names.useDomain(burst.domains.groups || this.timing.domain)
        if (!open) this.assembler.beginBurst(name)
        open = true
        this.runPattern(block)
        if (this.assembler.hasEnough) break
      } else if (this.file.bursts.has(entry.name)) {
        if (open) this.assembler.endBurst()
        open = false
        this.runBurst(entry.name, entry.place, depth + 1)
        if (this.assembler.hasEnough) break
      } else {
        this.findings.report(
          'unknown-name',
          entry.place.source,
          entry.place.span,
          `there is no Pattern or PatternBurst ${quoted(entry.name)}`,
          `Patterns here: ${[...this.file.patterns.keys()].slice(0, 10).map(quoted).join(', ') || 'none'}.`,
        )
      }
    }
    if (open) this.assembler.endBurst()
  }

  private runPattern(block: PatternBlock): void {
    const { findings } = this
    const lexer = new Lexer(block.source, findings, block.start, block.end)
    const reader = new StatementReader(lexer, this.names, findings)
    this.reset()
    let progressAt = block.start + PROGRESS_STEP
    let from = block.start
    lexer.start = block.start
    let running = true
    try {
      lexer.next()
    } catch (reason) {
      if (!(reason instanceof BrokenStatement)) throw reason
      return
    }
    while (running && !this.assembler.hasEnough) {
      from = lexer.start
      if (from >= progressAt) {
        progressAt = from + PROGRESS_STEP
        const done = Math.min(this.charactersTotal, this.charactersDone + from - block.start)
        if (this.onProgress?.(done, this.charactersTotal) === false) throw new ReadingStopped()
      }
      try {
        const statement = reader.next()
        if (statement === null) break
        if (this.assembler.isTooLarge) this.stopTooLarge()
        this.place = { source: block.source, span: statement.span }
        running = this.execute(statement, 0)
      } catch (reason) {
        if (!(reason instanceof BrokenStatement)) throw reason
        if (!lexer.skipStatement(from, true)) break
      }
    }
    this.charactersDone += block.end - block.start
  }

  private stopTooLarge(): never {
    const { source, span } = this.place
    this.findings.report(
      'limit',
      source,
      span,
      'the patterns up to here fill half a gigabyte; no more are read',
      'Split the file into several pattern sets.',
    )
    throw new ReadingStopped()
  }

  private reset(): void {
    const { initial } = this.file.signals
    this.fixed.fill(0)
    this.argumentLeft.fill(-1)
    for (let signal = 0; signal < this.state.length; signal++) {
      const character = { U: '1', D: '0', Z: 'Z' }[initial[signal] ?? '']
      this.state[signal] = character === undefined ? 0 : character.charCodeAt(0)
    }
    this.useTable(this.customary)
  }

  /** Runs one statement; false after Stop. */
  private execute(statement: Statement, depth: number): boolean {
    switch (statement.kind) {
      case 'vector':
        for (const assignment of statement.assignments) this.assign(assignment, false, depth === 0)
        this.vector()
        return true
      case 'condition':
        for (const assignment of statement.assignments) this.assign(assignment, false, false)
        return true
      case 'fixed':
        for (const assignment of statement.assignments) this.assign(assignment, true, false)
        return true
      case 'table':
        this.useTable(this.tableNamed(statement.name))
        return true
      case 'call':
      case 'macro':
        this.call(statement, depth)
        return true
      case 'shift':
        this.shift(statement.body)
        return true
      case 'loop':
        return this.loop(statement.count, statement.body, depth)
      case 'match-loop':
        this.counts.hasMatchLoop = true
        this.findings.caution(
          'unsupported-construct',
          this.place.source,
          this.place.span,
          'MatchLoop',
          'MatchLoop runs until the device answers, which is not supported; it is counted as run once',
          'Cycle counts are a lower bound for this file.',
        )
        return this.runBody(statement.body, depth)
      case 'stop':
        return false
    }
  }

  private runBody(body: readonly Statement[], depth: number): boolean {
    return body.every((statement) => this.execute(statement, depth))
  }

  /** A loop whose second round neither compares nor loads is run twice, and the rounds left are counted at once. */
  private loop(count: number, body: readonly Statement[], depth: number): boolean {
    const { counts, assembler } = this
    const wasRepeating = this.repeating
    let running = true
    for (let round = 0; round < count && running; round++) {
      this.unrolled += 1 + body.length
      if (this.unrolled > MAX_UNROLLED) {
        this.findings.report(
          'limit',
          this.place.source,
          this.place.span,
          `loops that compare or load run more than ${MAX_UNROLLED} statements`,
        )
        throw new ReadingStopped()
      }
      if (assembler.isTooLarge) this.stopTooLarge()
      const before = { ...counts }
      const events = assembler.events
      const captures = assembler.captures
      running = this.runBody(body, depth)
      if (round === 1 && running && assembler.events === events) {
        const left = count - 2
        counts.cycles += left * (counts.cycles - before.cycles)
        counts.seconds += left * (counts.seconds - before.seconds)
        counts.timedCycles += left * (counts.timedCycles - before.timedCycles)
        counts.statements += left * (counts.statements - before.statements)
        assembler.addCaptures(left * (assembler.captures - captures))
        break
      }
      this.repeating = true
    }
    this.repeating = wasRepeating
    return running
  }

  private vector(): void {
    const { counts } = this
    this.count(1)
    counts.statements++
    if (!this.repeating) counts.vectors++
    if (this.undefineds > 0) this.reportUndefined()
    this.assembler.cycle(this)
  }

  private count(cycles: number): void {
    this.counts.cycles += cycles
    if (!Number.isNaN(this.table.periodSeconds)) {
      this.counts.seconds += cycles * this.table.periodSeconds
      this.counts.timedCycles += cycles
    }
  }

  /**
   * One shift for each character of the longest data that its "#" stand for. Shorter scan-in data are padded in front and
   * shorter scan-out data behind, so that both line up with the cells (clause 24).
   */
  private shift(body: readonly Statement[]): void {
    const { argumentLeft, findings, place, counts } = this
    const shifted: number[] = []
    let vectors = 0
    let length = 0
    for (const statement of body) {
      if (statement.kind !== 'vector') {
        if (statement.kind !== 'condition' && statement.kind !== 'fixed' && statement.kind !== 'table') {
          const message = `a ${statement.kind} inside Shift is not supported; expected V, C, F or W`
          findings.fail('unsupported-construct', place.source, place.span, message)
        }
        this.execute(statement, 0)
        continue
      }
      vectors++
      for (const assignment of statement.assignments) {
        const members = this.members(assignment)
        const single = assignment.end - assignment.start === 1
        for (let at = 0; at < members.length; at++) {
          const code = assignment.text.charCodeAt(assignment.start + (single ? 0 : at))
          const signal = members[at]
          if (code !== HASH) this.give(signal, code === PERCENT ? this.argument(signal, false) : code)
          else {
            shifted.push(signal)
            length = Math.max(length, argumentLeft[signal])
          }
        }
      }
    }
    if (vectors === 0) return
    if (vectors > 1 && new Set(shifted).size < shifted.length) {
      const message = 'a Shift that passes one signal two characters a round is not supported'
      findings.fail('unsupported-construct', place.source, place.span, message)
    }
    if (this.undefineds > 0) this.reportUndefined()
    this.count(length * vectors)
    counts.shiftCycles += length * vectors
    counts.statements += vectors
    if (!this.repeating) counts.vectors += vectors
    this.assembler.shift(this, length, vectors, shifted)
    for (const signal of shifted) {
      const left = argumentLeft[signal]
      if (left <= 0) continue
      const last = this.argumentFrom[signal] + (left - 1) * this.argumentStride[signal]
      this.give(signal, this.argumentText[signal].charCodeAt(last))
      argumentLeft[signal] = 0
    }
  }

  private call(statement: Statement & { kind: 'call' | 'macro' }, depth: number): void {
    const isCall = statement.kind === 'call'
    const procedure = this.procedure(statement.name, isCall)
    if (depth >= MAX_CALL_DEPTH) {
      this.findings.report(
        'limit',
        this.place.source,
        this.place.span,
        'calls nested too deep, or in a circle',
      )
      throw new ReadingStopped()
    }
    const outer = depth === 0 ? null : this.saveArguments()
    const bound = this.bind(statement.assignments)
    const saved = isCall ? { state: this.state.slice(), table: this.table } : null
    const fixed = this.fixed.slice()
    if (saved !== null) {
      this.state.fill(0)
      this.recount()
    }
    if (procedure.hasShift) this.assembler.beginLoad()
    const { place } = this
    this.runBody(procedure.body, depth + 1)
    this.place = place
    if (procedure.hasShift) this.assembler.endLoad()
    this.fixed.set(fixed)
    if (saved !== null) {
      this.state.set(saved.state)
      this.table = saved.table
      this.recount()
    }
    this.unbind(bound, procedure)
    if (outer !== null) this.restoreArguments(outer)
  }

  private procedure(name: string, isCall: boolean): Procedure {
    const all = isCall ? this.file.procedures : this.file.macros
    const domain = isCall ? this.domains.procedures : this.domains.macros
    const found = all.get(domain)?.get(name) ?? all.get('')?.get(name)
    if (found !== undefined) return found
    for (const procedures of all.values()) {
      const elsewhere = procedures.get(name)
      if (elsewhere !== undefined) return elsewhere
    }
    const known = [...all.values()].flatMap((procedures) => [...procedures.keys()])
    this.findings.fail(
      'unknown-name',
      this.place.source,
      this.place.span,
      `there is no ${isCall ? 'procedure' : 'macro'} ${quoted(name)}`,
      `Here are: ${known.slice(0, 10).map(quoted).join(', ') || 'none'}.`,
    )
  }

  /** Hands data to the signals of a call and returns those signals; data that start with "#" pass on what came in. */
  private bind(assignments: readonly Assignment[]): Int32Array[] {
    const bound: Int32Array[] = []
    for (const assignment of assignments) {
      const { text, start, end, source, span } = assignment
      const members = this.names.find(assignment.reference, { source, span })
      if (text.charCodeAt(start) === HASH) continue
      const width = members.length
      if (width === 0 || (end - start) % width !== 0) {
        this.findings.fail(
          'width-mismatch',
          source,
          span,
          `${quoted(assignment.reference)} has ${width} signals, found ${end - start} waveform characters; expected a multiple`,
        )
      }
      for (let at = 0; at < width; at++) {
        const signal = members[at]
        this.argumentText[signal] = text
        this.argumentFrom[signal] = start + at
        this.argumentStride[signal] = width
        this.argumentLeft[signal] = (end - start) / width
      }
      bound.push(members)
    }
    return bound
  }

  private unbind(bound: readonly Int32Array[], procedure: Procedure): void {
    let unused = -1
    for (const members of bound) {
      for (const signal of members) {
        if (this.argumentLeft[signal] > 0) unused = signal
        this.argumentLeft[signal] = -1
        this.argumentText[signal] = ''
      }
    }
    if (unused >= 0) {
      const name = this.file.signals.names[unused] ?? ''
      this.findings.caution(
        'ignored',
        this.place.source,
        this.place.span,
        `${procedure.name} ${name}`,
        `data for ${quoted(name)} were not all used by ${quoted(procedure.name)}`,
      )
    }
  }

  private saveArguments(): { text: string[]; from: Int32Array; stride: Int32Array; left: Int32Array } {
    return {
      text: this.argumentText.slice(),
      from: this.argumentFrom.slice(),
      stride: this.argumentStride.slice(),
      left: this.argumentLeft.slice(),
    }
  }

  private restoreArguments(saved: ReturnType<PatternRunner['saveArguments']>): void {
    for (let signal = 0; signal < saved.text.length; signal++) this.argumentText[signal] = saved.text[signal]
    this.argumentFrom.set(saved.from)
    this.argumentStride.set(saved.stride)
    this.argumentLeft.set(saved.left)
  }

  private members(assignment: Assignment): Int32Array {
    const { source, span, start, end, text } = assignment
    const members = this.names.find(assignment.reference, { source, span })
    const first = text.charCodeAt(start)
    const isParameter = end - start === 1 && (first === HASH || first === PERCENT)
    if (members.length !== end - start && !isParameter) {
      this.findings.fail(
        'width-mismatch',
        source,
        span,
        `${quoted(assignment.reference)} has ${members.length} signals, found ${end - start} waveform characters`,
        'Give each signal one character; \\rN repeats the one after it N times.',
      )
    }
    return members
  }

  private assign(assignment: Assignment, fix: boolean, isData: boolean): void {
    const { text, start, end } = assignment
    const members = this.members(assignment)
    const step = end - start === 1 ? 0 : 1
    for (let at = 0; at < members.length; at++) {
      const signal = members[at]
      let code = text.charCodeAt(start + at * step)
      const isParameter = code === HASH || code === PERCENT
      if (isParameter) code = this.argument(signal, code === HASH)
      this.isData[signal] = isData || isParameter ? 1 : 0
      this.give(signal, code)
      if (fix) this.fixed[signal] = 1
    }
  }

  /** The next character passed for a signal; 0 where none was passed. */
  private argument(signal: number, take: boolean): number {
    if (this.argumentLeft[signal] <= 0) return 0
    const code = this.argumentText[signal].charCodeAt(this.argumentFrom[signal])
    if (take) {
      this.argumentFrom[signal] += this.argumentStride[signal]
      this.argumentLeft[signal]--
    }
    return code
  }

  private give(signal: number, code: number): void {
    const { state, table } = this
    const before = state[signal]
    if (code >= CHARACTERS) code = CHARACTERS - 1
    if (before === code) return
    if (this.fixed[signal] === 1) {
      const name = this.file.signals.names[signal] ?? ''
      const message = `${quoted(name)} is fixed by F and is given another value; the fixed value holds`
      this.findings.caution('ignored', this.place.source, this.place.span, name, message)
      return
    }
    const row = table.row[signal] * CHARACTERS
    const was = table.flags[row + before]
    const is = table.flags[row + code]
    if (was !== is) {
      if (((was ^ is) & DEFINED) !== 0) this.undefineds += (is & DEFINED) === 0 ? 1 : -1
      const compared = (was & COMPARE_MASK) !== Compare.None
      if (compared !== ((is & COMPARE_MASK) !== Compare.None)) this.compares += compared ? -1 : 1
    }
    state[signal] = code
  }

  private useTable(table: CompiledTable): void {
    if (table === this.table) return
    this.table = table
    this.recount()
  }

  private recount(): void {
    const { state, table } = this
    const { row, flags } = table
    let compares = 0
    let undefineds = 0
    for (let signal = 0; signal < state.length; signal++) {
      const flag = flags[row[signal] * CHARACTERS + state[signal]]
      if ((flag & COMPARE_MASK) !== 0) compares++
      if ((flag & DEFINED) === 0) undefineds++
    }
    this.compares = compares
    this.undefineds = undefineds
  }

  private tableNamed(name: string): CompiledTable {
    const known = this.compiled.get(name)
    if (known !== undefined) return known
    let { tables } = this.timing
    if (!tables.has(name)) {
      for (const timing of this.file.timings.values()) if (timing.tables.has(name)) tables = timing.tables
    }
    const table = tables.get(name)
    if (table === undefined) {
      this.findings.report(
        'unknown-name',
        this.place.source,
        this.place.span,
        `there is no WaveformTable ${quoted(name)}`,
        `Tables here: ${[...tables.keys()].slice(0, 10).map(quoted).join(', ') || 'none'}.`,
      )
    }
    let compiled = this.customary
    if (table !== undefined) {
      try {
        compiled = compileTable(table, tables, this.file, this.names)
      } catch (reason) {
        if (!(reason instanceof BrokenStatement)) throw reason
      }
    }
    this.compiled.set(name, compiled)
    return compiled
  }

  private reportUndefined(): void {
    const { state, table, file, place } = this
    for (let signal = 0; signal < state.length; signal++) {
      if ((table.flags[table.row[signal] * CHARACTERS + state[signal]] & DEFINED) !== 0) continue
      const name = file.signals.names[signal] ?? ''
      const character = String.fromCharCode(state[signal])
      this.findings.caution(
        'unknown-character',
        place.source,
        place.span,
        `${name} ${character}`,
        `waveform table ${quoted(table.name)} has no waveform ${quoted(character)} for ${quoted(name)}; it is taken as unknown and not compared`,
      )
    }
  }
}
