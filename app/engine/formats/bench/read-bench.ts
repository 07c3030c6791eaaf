import { CircuitBuilder, type CircuitFault } from '../../circuit/circuit-builder.ts'
import { GateKind } from '../../circuit/circuit.ts'
import type { Netlist } from '../../circuit/netlist.ts'
import { listLines } from '../../faults/list-lines.ts'
import {
  MAX_DIAGNOSTICS,
  type Diagnostic,
  type DiagnosticCode,
  type Reading,
} from '../../source/diagnostic.ts'
import { closestName } from '../../source/closest-name.ts'
import type { ReadingProgress } from '../../source/reading-progress.ts'
import type { Source, Span } from '../../source/source.ts'

const GATES: Readonly<Record<string, GateKind>> = {
  AND: GateKind.And,
  NAND: GateKind.Nand,
  OR: GateKind.Or,
  NOR: GateKind.Nor,
  XOR: GateKind.Xor,
  XNOR: GateKind.Xnor,
  NOT: GateKind.Not,
  INV: GateKind.Not,
  BUF: GateKind.Buffer,
  BUFF: GateKind.Buffer,
  DFF: GateKind.FlipFlop,
}

const CONSTANTS: Readonly<Record<string, GateKind>> = {
  CONST0: GateKind.Const0,
  GND: GateKind.Const0,
  VSS: GateKind.Const0,
  '0': GateKind.Const0,
  CONST1: GateKind.Const1,
  VDD: GateKind.Const1,
  VCC: GateKind.Const1,
  '1': GateKind.Const1,
}

const MAX_NAME = 4096
const PROGRESS_STEP = 4_000_000

const NEWLINE = 10
const RETURN = 13
const HASH = 35
const OPEN = 40
const CLOSE = 41
const COMMA = 44
const EQUALS = 61

/**
 * Reads a netlist in the benchmark sets' published `.bench` format (Brglez & Fujiwara 1985; Brglez, Bryan & Kozminski
 * 1989), in its full-scan view:
 *
 *     statement   = "INPUT" "(" name ")" | "OUTPUT" "(" name ")" | name "=" gate "(" name { "," name } ")" | name "=" constant
 *     gate        = AND | NAND | OR | NOR | XOR | XNOR | NOT | INV | BUF | BUFF | DFF         (any case)
 *     constant    = CONST0 [ "()" ] | CONST1 [ "()" ] | GND | VSS | VDD | VCC | 0 | 1
 *     comment     = "#" to the end of the line
 *
 * Statements stand in any order; names are any run of characters but white space and ( ) , = #. Reading goes on after an
 * error at the next line. Errors: syntax, limit, unknown-gate, pin-count, undriven-net, double-driver,
 * combinational-loop, no-outputs; an output declared twice counts once, with a warning.
 */
export function readBench(source: Source, options: { onProgress?: ReadingProgress } = {}): Reading<Netlist> {
  return new BenchReader(source, options.onProgress).read()
}

/** Where each net was driven and first used, for findings that are only clear at the end. */
type NetPlaces = { driver: Int32Array; use: Int32Array }

class BenchReader {
  private readonly text: string
  private readonly builder = new CircuitBuilder()
  private readonly diagnostics: Diagnostic[] = []
  private errors = 0
  private at = 0
  private gates = 0
  private nextProgress = PROGRESS_STEP
  private places: NetPlaces = { driver: new Int32Array(1024).fill(-1), use: new Int32Array(1024).fill(-1) }
  private readonly pins: number[] = []
  private readonly source: Source
  private readonly onProgress: ReadingProgress | undefined

  constructor(source: Source, onProgress: ReadingProgress | undefined) {
    this.source = source
    this.text = source.text
    this.onProgress = onProgress
  }

  read(): Reading<Netlist> {
    if (this.skipBlank() === -1) {
      this.report(
        'empty-file',
        { start: 0, end: 0 },
        'the file has no statement',
        'Expected INPUT(…), OUTPUT(…) and gates.',
      )
      return this.result(null)
    }
    while (this.errors < MAX_DIAGNOSTICS && this.skipBlank() !== -1) {
      if (this.at >= this.nextProgress) {
        this.nextProgress = this.at + PROGRESS_STEP
        if (this.onProgress?.(this.at, this.text.length) === false) return this.result(null)
      }
      if (!this.readStatement()) this.skipLine()
    }
    if (this.errors >= MAX_DIAGNOSTICS) {
      const here = { start: this.at, end: this.at }
      this.report('too-many', here, `${MAX_DIAGNOSTICS} errors found; reading stopped here`)
    }
    return this.errors > 0 ? this.result(null) : this.finish()
  }

  /** One statement; false where it is broken and the rest of the line is to be skipped. */
  private readStatement(): boolean {
    const start = this.at
    const word = this.readName()
    if (word === null) return this.expected('a name, INPUT or OUTPUT')
    const span = { start, end: this.at }
    const sign = this.skipBlank()
    if (sign === OPEN) return this.readDeclaration(word, span)
    if (sign === EQUALS) {
      this.at++
      return this.readDriver(word, span)
    }
    return this.expected(`"=" or "(" after "${shortened(word)}"`)
  }

  private readDeclaration(word: string, span: Span): boolean {
    const keyword = word.toUpperCase()
    if (keyword !== 'INPUT' && keyword !== 'OUTPUT') {
      this.report(
        'syntax',
        span,
        `"${shortened(word)}(" starts no statement; expected INPUT(name), OUTPUT(name) or name = GATE(…)`,
        didYouMean(keyword, ['INPUT', 'OUTPUT']),
      )
      return false
    }
    this.at++
    this.skipBlank()
    const nameStart = this.at
    const name = this.readName()
    if (name === null) return this.expected(`the name of the ${keyword.toLowerCase()}`)
    const nameSpan = { start: nameStart, end: this.at }
    if (this.skipBlank() !== CLOSE) return this.expected(`")" after "${shortened(name)}"`)
    this.at++
    const net = this.netAt(name, nameSpan)
    if (keyword === 'INPUT') return this.driveNet(net, GateKind.Input, nameSpan)
    this.noteUse(net, nameStart)
    if (!this.builder.observe(net)) {
      this.warn(
        'duplicate-declaration',
        nameSpan,
        `output "${shortened(name)}" is declared again; it counts once`,
      )
    }
    return true
  }

  private readDriver(name: string, span: Span): boolean {
    this.skipBlank()
    const gateStart = this.at
    const word = this.readName()
    if (word === null) return this.expected('a gate such as NAND(a, b)')
    const gateSpan = { start: gateStart, end: this.at }
    const keyword = word.toUpperCase()
    const hasPins = this.skipBlank() === OPEN
    const constant = CONSTANTS[keyword]
    if (constant !== undefined && !hasPins) return this.driveNet(this.netAt(name, span), constant, span)
    if (!hasPins) {
      if (GATES[keyword] !== undefined) return this.expected(`"(" after ${keyword}`)
      this.report(
        'syntax',
        gateSpan,
        `expected a gate such as NAND(a, b) or a constant, found "${shortened(word)}"`,
      )
      return false
    }
    this.at++
    if (!this.readPins(constant !== undefined)) return false
    if (constant !== undefined) {
      if (this.pins.length > 0) return this.pinCount(gateSpan, keyword, 'no input')
      return this.driveNet(this.netAt(name, span), constant, span)
    }
    const kind = GATES[keyword]
    if (kind === undefined) {
      this.report(
        'unknown-gate',
        gateSpan,
        `"${shortened(word)}" is no gate of this format; expected one of ${Object.keys(GATES).join(', ')}`,
        didYouMean(keyword, Object.keys(GATES)),
      )
      return true
    }
    const single = kind === GateKind.Not || kind === GateKind.Buffer || kind === GateKind.FlipFlop
    if (single && this.pins.length !== 1) return this.pinCount(gateSpan, keyword, 'exactly one input')
    if (this.pins.length === 0) return this.pinCount(gateSpan, keyword, 'at least one input')
    if (kind !== GateKind.FlipFlop) this.gates++
    return this.driveNet(this.netAt(name, span), kind, span)
  }

  /** Fills `pins` with the nets up to the closing parenthesis. */
  private readPins(mayBeEmpty: boolean): boolean {
    this.pins.length = 0
    if (this.skipBlank() === CLOSE) {
      this.at++
      return true
    }
    for (;;) {
      this.skipBlank()
      const start = this.at
      const name = this.readName()
      if (name === null) return this.expected(mayBeEmpty ? '")"' : 'the name of an input')
      const net = this.netAt(name, { start, end: this.at })
      this.noteUse(net, start)
      this.pins.push(net)
      const sign = this.skipBlank()
      if (sign !== COMMA && sign !== CLOSE) return this.expected('"," or ")"')
      this.at++
      if (sign === CLOSE) return true
    }
  }

  private pinCount(span: Span, keyword: string, wanted: string): boolean {
    this.report('pin-count', span, `${keyword} takes ${wanted}, found ${this.pins.length}`)
    return true
  }

  private driveNet(net: number, kind: GateKind, span: Span): boolean {
    if (this.builder.isDriven(net)) {
      const first = this.places.driver[net]
      const name = this.builder.names[net] ?? ''
      this.error({
        code: 'double-driver',
        severity: 'error',
        file: this.source.name,
        span,
        message: `net "${shortened(name)}" is driven a second time; expected one driver a net`,
        notes: [
          {
            file: this.source.name,
            span: { start: first, end: first + name.length },
            message: 'first driven here',
          },
        ],
        hint: 'Remove one of the two, or give one of them another name.',
      })
      return true
    }
    const isSource = kind < GateKind.Buffer && kind !== GateKind.FlipFlop
    this.builder.drive(net, kind, isSource ? [] : this.pins)
    this.places.driver[net] = span.start
    return true
  }

  private finish(): Reading<Netlist> {
    const name = this.source.name
      .replace(/^.*[\\/]/, '')
      .replace(/\.gz$/i, '')
      .replace(/\.bench$/i, '')
    const circuit = this.builder.finish(name)
    if (Array.isArray(circuit)) {
      for (const fault of circuit as readonly CircuitFault[]) {
        if (this.errors >= MAX_DIAGNOSTICS) break
        this.reportFault(fault)
      }
      return this.result(null)
    }
    const finished = circuit as Exclude<typeof circuit, readonly CircuitFault[]>
    if (finished.outputs.length + finished.flipFlops.length === 0) {
      this.report(
        'no-outputs',
        { start: 0, end: 0 },
        'the circuit has no OUTPUT and no flip-flop, so no fault could be observed',
        'Declare at least one OUTPUT(name).',
      )
      return this.result(null)
    }
    return this.result({
      circuit: finished,
      chains: [],
      report: {
        format: 'bench',
        top: name,
        gates: this.gates,
        flipFlops: finished.flipFlops.length,
        lines: listLines(finished).table.n,
        cellsUsed: [],
        cellsUnknown: [],
        unusable: [],
        testPins: [],
      },
    })
  }

  private reportFault(fault: CircuitFault): void {
    const { names } = this.builder
    if (fault.kind === 'undriven-net') {
      const name = names[fault.net] ?? ''
      const start = this.places.use[fault.net] ?? 0
      this.report(
        'undriven-net',
        { start, end: start + name.length },
        `net "${shortened(name)}" is used but nothing drives it`,
        didYouMean(name, names.filter((_, net) => this.builder.isDriven(net)).slice(0, 200_000)) ??
          `Declare it by INPUT(${shortened(name)}) or give it a gate.`,
      )
      return
    }
    const path = fault.nets.slice(0, 12).map((net) => shortened(names[net] ?? ''))
    const more = fault.nets.length > 12 ? ` … (${fault.nets.length} nets)` : ''
    const start = this.places.driver[fault.nets[0] ?? 0] ?? 0
    this.report(
      'combinational-loop',
      { start, end: start + (names[fault.nets[0] ?? 0] ?? '').length },
      `a loop without a flip-flop: ${path.join(' → ')}${more} → ${path[0]}`,
      'Break the loop with a DFF, or correct the net name that closes it.',
    )
  }

  private netAt(name: string, span: Span): number {
    if (name.length > MAX_NAME) {
      this.report('limit', span, `a name of ${name.length} characters; at most ${MAX_NAME} are read`)
    }
    const net = this.builder.net(name)
    if (net >= this.places.use.length) this.growPlaces()
    return net
  }

  private noteUse(net: number, start: number): void {
    if (this.places.use[net] === -1) this.places.use[net] = start
  }

  private growPlaces(): void {
    const larger = (column: Int32Array): Int32Array => {
      const grown = new Int32Array(column.length * 2).fill(-1)
      grown.set(column)
      return grown
    }
    this.places = { driver: larger(this.places.driver), use: larger(this.places.use) }
  }

  /** Moves to the next character that is neither white space nor comment and returns its code, −1 at the end. */
  private skipBlank(): number {
    const { text } = this
    for (; this.at < text.length; this.at++) {
      const code = text.charCodeAt(this.at)
      if (code === HASH) {
        this.at = endOfLine(text, this.at)
        if (this.at >= text.length) return -1
      } else if (!isBlank(code)) return code
    }
    return -1
  }

  private skipLine(): void {
    this.at = endOfLine(this.text, this.at)
  }

  private readName(): string | null {
    const { text } = this
    const start = this.at
    while (this.at < text.length && isNameCode(text.charCodeAt(this.at))) this.at++
    return this.at > start ? text.slice(start, this.at) : null
  }

  private expected(what: string): false {
    const end = this.skipBlank() === -1
    const found = end ? 'the end of the file' : `"${this.text[this.at]}"`
    this.report(
      end ? 'truncated' : 'syntax',
      { start: this.at, end: this.at + (end ? 0 : 1) },
      `expected ${what}, found ${found}`,
      end ? 'The file may have been cut off; compare its size with the original.' : undefined,
    )
    return false
  }

  private report(code: DiagnosticCode, span: Span, message: string, hint?: string): void {
    this.error({ code, severity: 'error', file: this.source.name, span, message, ...(hint ? { hint } : {}) })
  }

  private error(diagnostic: Diagnostic): void {
    this.errors++
    this.diagnostics.push(diagnostic)
  }

  private warn(code: DiagnosticCode, span: Span, message: string): void {
    if (this.diagnostics.length - this.errors < MAX_DIAGNOSTICS) {
      this.diagnostics.push({ code, severity: 'warning', file: this.source.name, span, message })
    }
  }

  private result(value: Netlist | null): Reading<Netlist> {
    return { value, diagnostics: this.diagnostics }
  }
}

function endOfLine(text: string, from: number): number {
  for (let at = from; at < text.length; at++) {
    const code = text.charCodeAt(at)
    if (code === NEWLINE || code === RETURN) return at
  }
  return text.length
}

function isBlank(code: number): boolean {
  return code <= 32 || code === 0xfeff || code === 0xa0
}

function isNameCode(code: number): boolean {
  return !(
    code <= 32 ||
    code === OPEN ||
    code === CLOSE ||
    code === COMMA ||
    code === EQUALS ||
    code === HASH ||
    code === 0xfeff ||
    code === 0xa0
  )
}

function shortened(name: string): string {
  return name.length <= 60 ? name : `${name.slice(0, 57)}…`
}

function didYouMean(name: string, candidates: readonly string[]): string | undefined {
  const closest = closestName(name, candidates)
  return closest === null ? undefined : `Did you mean "${closest}"?`
}
