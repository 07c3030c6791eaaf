import { GateKind } from '../../circuit/circuit.ts'
import { IntList } from '../../circuit/int-list.ts'
import { closestName } from '../../source/closest-name.ts'
import type { DiagnosticCode } from '../../source/diagnostic.ts'
import { quoted, type FindingList } from '../../source/finding-list.ts'
import type { ReadingProgress } from '../../source/reading-progress.ts'
import type { Source } from '../../source/source.ts'
import { wordOf, type Word } from './keywords.ts'
import { Sign, Token, VerilogLexer } from './lexer.ts'
import type { NameTable } from './name-table.ts'
import { ConstantBit, Operation, ParsedModule, PORT_FLAGS, SignalFlag } from './parsed-module.ts'

const MAX_WIDTH = 1 << 16
const MAX_BITS = 1 << 28
const MAX_NESTING = 400
const PROGRESS_STEP = 4_000_000

const GATES: Partial<Record<Word, GateKind>> = {
  and: GateKind.And,
  nand: GateKind.Nand,
  or: GateKind.Or,
  nor: GateKind.Nor,
  xor: GateKind.Xor,
  xnor: GateKind.Xnor,
  buf: GateKind.Buffer,
  not: GateKind.Not,
}

/** Three-state gates, with their flags of Operation.ThreeState. */
const THREE_STATE: Partial<Record<Word, number>> = { bufif1: 0, bufif0: 1, notif1: 2, notif0: 3 }

const NET_TYPES: ReadonlySet<Word> = new Set(['wire', 'tri', 'supply0', 'supply1', 'reg', 'trireg', 'uwire'])
const WIRED_TYPES: ReadonlySet<Word> = new Set(['wand', 'wor', 'triand', 'trior', 'tri0', 'tri1'])

const UNSUPPORTED_SWITCHES: ReadonlySet<Word> = new Set([
  'cmos', 'rcmos', 'rnmos', 'rpmos', 'tran', 'rtran', 'tranif0', 'tranif1', 'rtranif0', 'rtranif1', 'pullup', 'pulldown',
]) // prettier-ignore

/** Constructs that are skipped as a block after the error that names them. */
const BLOCKS: Partial<Record<Word, { end: Word; what: string }>> = {
  function: { end: 'endfunction', what: 'a function is behavioural code' },
  task: { end: 'endtask', what: 'a task is behavioural code' },
  generate: { end: 'endgenerate', what: 'a generate block is not elaborated' },
}

const VARIABLES: ReadonlySet<Word> = new Set(['integer', 'real', 'realtime', 'time', 'event', 'genvar'])

const STRENGTHS: ReadonlySet<Word> = new Set([
  'supply0', 'supply1', 'strong0', 'strong1', 'pull0', 'pull1', 'weak0', 'weak1', 'highz0', 'highz1', 'small', 'medium',
  'large',
]) // prettier-ignore

/** Thrown at an error from which reading goes on after the statement; the finding is already recorded. */
class StatementError extends Error {}

/** Thrown where the parser has already moved behind the construct in error. */
class SkippedError extends StatementError {}

/** A stretch of the parser's bit stack, msb first. `inverts`: a wider context would change it, so it is not extended. */
type Operand = { at: number; width: number; inverts: boolean; isUnsized: boolean }

/**
 * Parses the netlist subset of IEEE 1364-2005 into modules:
 *
 *     source      = { module | "primitive" … }
 *     module      = ("module" | "macromodule") name [ "#(" … ")" ] [ "(" ports ")" ] ";" { statement } "endmodule"
 *     statement   = direction | net declaration | parameter | assign | gate | instance | flip-flop | specify block
 *     flip-flop   = "always" "@" "(" "posedge" net ")" target "<=" expression ";"
 *     expression  = the bitwise, logical, reduction and equality operators, "?:", selects, concatenation, replication
 *
 * Each operator becomes one gate for each bit, so each is a line of the netlist as if it had been written as a gate;
 * inner nets are named after the target, `z:1`, `z:2`, in the order in which they are evaluated. `a ? b : c` becomes an inverter, three AND
 * gates and an OR gate, `a&b | ~a&c | b&c`: the third term keeps equal data bits known while the select is not, as
 * IEEE 1364-2005, 5.1.13, demands.
 *
 * After an error reading goes on behind the next semicolon.
 */
export class VerilogParser {
  readonly modules: ParsedModule[] = []
  private readonly lexer: VerilogLexer
  private readonly source: Source
  private readonly names: NameTable
  private readonly findings: FindingList
  private readonly onProgress: ReadingProgress | undefined
  private module: ParsedModule
  /** Per name id: its signal in the module that is being read, plus one; 0 where it has none. */
  private signalOf: Int32Array
  private readonly parameters = new Map<number, number>()
  private readonly bits = new IntList(256)
  private readonly connections = new IntList(256)
  private nesting = 0
  private nextProgress = PROGRESS_STEP
  /** Where the gate that drives an inner net of this statement stands in the items, by net minus `firstInner`. */
  private readonly outputAt = new IntList()
  private firstInner = 0
  private isCancelled = false

  constructor(
    source: Source,
    names: NameTable,
    findings: FindingList,
    onProgress: ReadingProgress | undefined,
  ) {
    this.source = source
    this.names = names
    this.findings = findings
    this.onProgress = onProgress
    this.lexer = new VerilogLexer(source, names, findings)
    this.module = new ParsedModule(-1, source, 0)
    this.signalOf = new Int32Array(4096)
  }

  /** Reads the whole source; false where the caller cancelled. */
  parse(): boolean {
    const { lexer } = this
    lexer.next()
    while (lexer.token !== Token.End && !this.findings.isFull && !this.isCancelled) {
      const word = this.word()
      if (word === 'module' || word === 'macromodule') this.parseModule()
      else if (word === 'primitive')
        this.skipBlock('endprimitive', 'a user-defined primitive is a table, not a netlist')
      else if (word === 'config') this.skipBlock('endconfig', 'a configuration is not read')
      else {
        this.reportExpected('"module"')
        this.skipTo('module')
      }
    }
    return !this.isCancelled
  }

  private parseModule(): void {
    const { lexer } = this
    const start = lexer.start
    lexer.next()
    const place = lexer.start
    if (lexer.token !== Token.Name) {
      this.reportExpected('the name of the module')
      this.skipTo('endmodule')
      if (lexer.token !== Token.End) lexer.next()
      return
    }
    for (const name of this.module.signalName.view()) this.signalOf[name] = 0
    this.module = new ParsedModule(lexer.name, this.source, place)
    this.parameters.clear()
    lexer.next()
    this.statement(() => this.parseHeader())
    for (;;) {
      if (this.findings.isFull || !this.reportProgress()) return
      const word = this.word()
      if (word === 'endmodule') break
      if (lexer.token === Token.End || word === 'module' || word === 'macromodule') {
        this.error(
          lexer.token === Token.End ? 'truncated' : 'syntax',
          start,
          place + this.names.text(this.module.name).length,
          `module ${quoted(this.names.text(this.module.name))} has no "endmodule"`,
          'The file may have been cut off; compare its size with the original.',
        )
        break
      }
      this.statement(() => this.parseItem())
    }
    if (this.word() === 'endmodule') lexer.next()
    this.checkPorts()
    this.modules.push(this.module)
  }

  private checkPorts(): void {
    const { module } = this
    for (const signal of module.ports.view()) {
      if ((module.signalFlags.data[signal] & PORT_FLAGS) !== 0) continue
      const name = module.signalName.data[signal]
      const place = module.signalPlace.data[signal]
      this.error(
        'syntax',
        place,
        place + this.names.text(name).length,
        `port ${this.quotedName(name)} has no direction`,
        'Declare it as input, output or inout.',
      )
    }
  }

  /** Runs one statement's parser; after an error moves behind the next semicolon. */
  private statement(parse: () => void): void {
    const before = this.lexer.start
    const itemsBefore = this.module.items.length
    this.bits.length = 0
    this.connections.length = 0
    this.nesting = 0
    this.firstInner = this.module.nBits
    this.outputAt.length = 0
    try {
      parse()
    } catch (error) {
      if (!(error instanceof StatementError)) throw error
      this.module.items.length = itemsBefore
      if (error instanceof SkippedError) return
      const word = this.word()
      if (this.lexer.start === before && word !== 'endmodule') this.lexer.next()
      this.skipStatement()
    }
  }

  // Header and declarations

  /** [ "#(" … ")" ] [ "(" ports ")" ] ";" */
  private parseHeader(): void {
    const { lexer } = this
    if (lexer.token === Sign.hash) {
      lexer.next()
      this.expect(Sign.open, '"(" after "#"')
      if (!this.accept(Sign.close)) {
        do {
          if (this.word() === 'parameter') lexer.next()
          this.parseParameter()
        } while (this.accept(Sign.comma))
        this.expect(Sign.close, '")" after the parameters')
      }
    }
    if (this.accept(Sign.open) && !this.accept(Sign.close)) {
      const word = this.word()
      if (word === 'input' || word === 'output' || word === 'inout') this.parseAnsiPorts()
      else this.parsePortNames()
      this.expect(Sign.close, '"," or ")" in the port list')
    }
    this.expect(Sign.semicolon, '";" after the module header')
  }

  private parseAnsiPorts(): void {
    let flags = 0
    let range: Range | null = null
    do {
      const word = this.word()
      if (word === 'input' || word === 'output' || word === 'inout') flags = this.parseDirection()
      if (word !== null) range = this.parseNetType()
      const place = this.lexer.start
      const name = this.expectName('the name of a port')
      const signal = this.declareSignal(name, flags | SignalFlag.Typed, range, place)
      this.module.ports.push(signal)
      if (this.lexer.token === Sign.equals)
        this.unsupported(place, this.lexer.end, 'an initial value of a port')
    } while (this.accept(Sign.comma))
  }

  private parsePortNames(): void {
    const { lexer } = this
    do {
      if (lexer.token === Sign.comma || lexer.token === Sign.close) {
        this.unsupported(lexer.start, lexer.end, 'an empty place in the port list')
      }
      const isRenamed = this.accept(Sign.dot)
      const place = lexer.start
      if (lexer.token === Sign.openBrace || isRenamed) {
        this.unsupported(place, lexer.end, 'a port that is an expression')
      }
      const name = this.expectName('the name of a port')
      if (lexer.token === Sign.openBracket)
        this.unsupported(place, lexer.end, 'a port that is a part of a signal')
      let signal = this.signalNamed(name)
      if (signal < 0) signal = this.module.addSignal(name, SignalFlag.Implicit, 0, 0, false, place)
      else {
        this.fail(
          'duplicate-declaration',
          place,
          lexer.start,
          `port ${this.quotedName(name)} is listed twice`,
        )
      }
      this.noteSignal(name, signal)
      this.module.ports.push(signal)
    } while (this.accept(Sign.comma))
  }

  private parseDirection(): number {
    const word = this.word()
    this.lexer.next()
    if (word === 'input') return SignalFlag.Input
    return word === 'output' ? SignalFlag.Output : SignalFlag.Inout
  }

  /** [ net type ] [ "signed" ] [ range ]; the range, or null. */
  private parseNetType(): Range | null {
    const word = this.word()
    if (word !== null && (NET_TYPES.has(word) || WIRED_TYPES.has(word))) {
      if (WIRED_TYPES.has(word)) this.unsupported(this.lexer.start, this.lexer.end, `a net of type ${word}`)
      this.lexer.next()
    }
    if (this.word() === 'signed') this.lexer.next()
    return this.parseRange()
  }

  /** "[" constant ":" constant "]", or null where there is none. */
  private parseRange(): Range | null {
    const { lexer } = this
    const start = lexer.start
    if (!this.accept(Sign.openBracket)) return null
    const msb = this.parseConstant()
    this.expect(Sign.colon, '":" in the range')
    const lsb = this.parseConstant()
    const end = lexer.end
    this.expect(Sign.closeBracket, '"]" after the range')
    this.checkWidth(Math.abs(msb - lsb) + 1, start, end)
    return { msb, lsb }
  }

  private checkWidth(width: number, start: number, end: number): void {
    if (width > MAX_WIDTH || this.module.nBits + width > MAX_BITS) {
      this.fail('limit', start, end, `${width} bits in one signal; at most ${MAX_WIDTH} are read`)
    }
  }

  /** Declares a name, or completes an earlier declaration of it (port list, direction, type). */
  private declareSignal(name: number, flags: number, range: Range | null, place: number): number {
    const { module } = this
    let signal = this.signalNamed(name)
    if (signal < 0) {
      signal = module.addSignal(name, flags, range?.msb ?? 0, range?.lsb ?? 0, range !== null, place)
      this.noteSignal(name, signal)
    } else {
      const known = module.signalFlags.data[signal]
      if ((known & PORT_FLAGS) !== 0 && (flags & PORT_FLAGS) !== 0) {
        this.fail(
          'duplicate-declaration',
          place,
          this.lexer.start,
          `port ${this.quotedName(name)} has a direction already`,
          'Remove one of the two declarations.',
        )
      }
      if ((known & SignalFlag.Implicit) !== 0 && range !== null) this.widen(signal, range, place)
      else if (range !== null) this.checkSameRange(signal, range, place)
      else if (
        (flags & known & SignalFlag.Typed) !== 0 &&
        (flags & PORT_FLAGS) === 0 &&
        (known & PORT_FLAGS) === 0
      ) {
        this.findings.warn(
          'duplicate-declaration',
          this.source,
          place,
          this.lexer.start,
          `net ${this.quotedName(name)} is declared again; it is one net`,
        )
      }
      module.signalFlags.data[signal] = (known | flags) & ~SignalFlag.Implicit
    }
    if ((flags & PORT_FLAGS) !== 0) module.directed.push(signal)
    return signal
  }

  /** Gives a signal that was only named so far its bits. */
  private widen(signal: number, range: Range, place: number): void {
    const { module } = this
    if (this.isUsed(signal)) {
      this.fail(
        'syntax',
        place,
        this.lexer.start,
        `${this.quotedName(module.signalName.data[signal])} is declared with a range after it was used`,
        'Move the declaration before the first use.',
      )
    }
    module.signalMsb.data[signal] = range.msb
    module.signalLsb.data[signal] = range.lsb
    module.signalIsVector.data[signal] = 1
    module.signalBit.data[signal] = module.nBits
    const step = range.msb >= range.lsb ? -1 : 1
    for (let index = range.msb; ; index += step) {
      module.bitSignal.push(signal)
      module.bitIndex.push(index)
      if (index === range.lsb) break
    }
  }

  /** True where a statement has used the signal's only bit; a port that is only listed has not been used. */
  private isUsed(signal: number): boolean {
    return (this.module.signalFlags.data[signal] & USED) !== 0
  }

  private checkSameRange(signal: number, range: Range, place: number): void {
    const { module } = this
    if (module.signalMsb.data[signal] === range.msb && module.signalLsb.data[signal] === range.lsb) return
    if (module.signalIsVector.data[signal] === 0 && !this.isUsed(signal)) {
      this.widen(signal, range, place)
      return
    }
    this.fail(
      'width-mismatch',
      place,
      this.lexer.start,
      `${this.quotedName(module.signalName.data[signal])} is declared as [${range.msb}:${range.lsb}] here and ` +
        `[${module.signalMsb.data[signal]}:${module.signalLsb.data[signal]}] before`,
    )
  }

  private parseItem(): void {
    const { lexer } = this
    if (lexer.token === Token.Name) return this.parseInstances()
    if (lexer.token === Sign.semicolon) return lexer.next()
    const word = this.word()
    if (word === null) return this.failExpected('a declaration, a gate, an instance or "assign"')
    if (word === 'input' || word === 'output' || word === 'inout') return this.parsePortDeclaration()
    if (NET_TYPES.has(word)) return this.parseNetDeclaration(word)
    if (WIRED_TYPES.has(word)) return this.unsupported(lexer.start, lexer.end, `a net of type ${word}`)
    if (word === 'assign') return this.parseAssign()
    if (GATES[word] !== undefined || THREE_STATE[word] !== undefined) return this.parseGates(word)
    if (word === 'nmos' || word === 'pmos') return this.parseGates(word)
    if (UNSUPPORTED_SWITCHES.has(word)) {
      return this.unsupported(lexer.start, lexer.end, `the switch primitive ${word}`)
    }
    if (word === 'parameter' || word === 'localparam') return this.parseParameters()
    if (word === 'specparam') return this.skipStatement()
    if (word === 'specify') return this.passBlock('endspecify')
    if (word === 'always') return this.parseAlways()
    if (word === 'initial') return this.failProcess('an "initial" block is behavioural code')
    if (word === 'defparam') return this.unsupported(lexer.start, lexer.end, 'a "defparam" override')
    if (VARIABLES.has(word)) return this.unsupported(lexer.start, lexer.end, `a variable of type ${word}`)
    const block = BLOCKS[word]
    if (block) return this.skipBlock(block.end, block.what)
    if (word === 'for' || word === 'if' || word === 'case') {
      return this.failProcess(`a generated "${word}" is not elaborated`)
    }
    return this.failExpected('a declaration, a gate, an instance or "assign"')
  }

  private parsePortDeclaration(): void {
    const flags = this.parseDirection() | SignalFlag.Typed
    const range = this.parseNetType()
    const { module } = this
    do {
      const place = this.lexer.start
      const name = this.expectName('the name of a port')
      const known = this.signalNamed(name)
      if (known < 0) {
        this.error(
          'unknown-name',
          place,
          this.lexer.start,
          `${this.quotedName(name)} is declared as a port but is not in the port list of its module`,
          this.suggest(name, this.portNames()),
        )
        continue
      }
      this.declareSignal(name, flags, range, place)
      if (this.lexer.token === Sign.equals) this.unsupported(place, this.lexer.end, 'an initial value')
    } while (this.accept(Sign.comma))
    this.expect(Sign.semicolon, `";" or "," after ${module.nSignals > 0 ? 'a port' : 'the declaration'}`)
  }

  private parseNetDeclaration(word: Word): void {
    const { lexer } = this
    const typeFlags =
      word === 'supply0'
        ? SignalFlag.Supply0
        : word === 'supply1'
          ? SignalFlag.Supply1
          : word === 'trireg'
            ? SignalFlag.Charge
            : 0
    lexer.next()
    this.passStrength()
    let next = this.word()
    if (next === 'scalared' || next === 'vectored') {
      lexer.next()
      next = this.word()
    }
    if (next === 'signed') lexer.next()
    const range = this.parseRange()
    this.passDelay()
    do {
      const place = lexer.start
      const name = this.expectName('the name of a net')
      const signal = this.declareSignal(name, typeFlags | SignalFlag.Typed, range, place)
      if (lexer.token === Sign.openBracket) this.unsupported(place, lexer.end, 'an array (memory)')
      if (lexer.token === Sign.equals) {
        if (word === 'reg') this.unsupported(place, lexer.end, 'an initial value of a reg')
        lexer.next()
        const target = this.signalOperand(signal)
        this.assign(target, this.parseExpression(), place)
      }
    } while (this.accept(Sign.comma))
    this.expect(Sign.semicolon, '";" or "," after the net')
  }

  private parseParameters(): void {
    this.lexer.next()
    do this.parseParameter()
    while (this.accept(Sign.comma))
    this.expect(Sign.semicolon, '";" after the parameter')
  }

  /** [ type ] [ range ] name "=" value; a value that is no integer constant is passed over. */
  private parseParameter(): void {
    const { lexer } = this
    for (let word = this.word(); word !== null; word = this.word()) {
      if (
        word !== 'signed' &&
        word !== 'integer' &&
        word !== 'real' &&
        word !== 'time' &&
        word !== 'localparam'
      )
        break
      lexer.next()
    }
    this.parseRange()
    const name = this.expectName('the name of a parameter')
    this.expect(Sign.equals, '"=" after the parameter')
    if (lexer.token === Token.String) {
      lexer.next()
      return
    }
    if (lexer.token === Token.Number && lexer.end - lexer.start > 0) {
      const text = this.source.text.slice(lexer.start, lexer.end)
      if (text.includes('.')) {
        lexer.next()
        return
      }
    }
    this.parameters.set(name, this.parseConstant())
  }

  // Statements

  private parseAssign(): void {
    this.lexer.next()
    this.passStrength()
    this.passDelay()
    do {
      const place = this.lexer.start
      this.bits.length = 0
      this.firstInner = this.module.nBits
      this.outputAt.length = 0
      const target = this.parseTarget()
      this.expect(Sign.equals, '"=" after the target of the assignment')
      this.assign(target, this.parseExpression(), place)
    } while (this.accept(Sign.comma))
    this.expect(Sign.semicolon, '";" after the assignment')
  }

  /** A net, a select, or a concatenation of such, that can be driven. */
  private parseTarget(): Operand {
    const start = this.lexer.start
    const target = this.parsePrimary()
    for (let at = target.at; at < target.at + target.width; at++) {
      if (this.bits.data[at] < 0 || this.isInner(this.bits.data[at])) {
        this.fail(
          'syntax',
          start,
          this.lexer.start,
          'only nets, their selects and concatenations can be driven',
        )
      }
    }
    return target
  }

  /** Connects an expression's bits to a target's, the last of each first: Verilog pads and cuts at the left. */
  private assign(target: Operand, value: Operand, place: number): void {
    const { bits, module } = this
    const { items } = module
    const fitted = this.fit(value, target.width, place)
    const base = fitted.at
    this.nameInner(bits.data[target.at])
    for (let at = 0; at < target.width; at++) {
      const to = bits.data[target.at + at]
      const from = bits.data[base + at]
      if (this.isInner(from)) {
        const output = this.outputAt.data[from - this.firstInner]
        if (items.data[output] === from) {
          items.data[output] = to
          continue
        }
        this.connect(to, items.data[output], place)
      } else this.connect(to, from, place)
    }
    this.dropUnusedInner()
  }

  private connect(to: number, from: number, place: number): void {
    const { items } = this.module
    items.push(Operation.Connect)
    items.push(place)
    items.push(to)
    items.push(from)
  }

  /** Names the inner nets of this statement after its target. */
  private nameInner(owner: number): void {
    const { bitSignal } = this.module
    for (let bit = this.firstInner; bit < this.firstInner + this.outputAt.length; bit++) {
      if (bitSignal.data[bit] === UNNAMED) bitSignal.data[bit] = -2 - 2 * owner
    }
  }

  /** Takes back inner nets at the end that a target replaced. */
  private dropUnusedInner(): void {
    const { module, outputAt } = this
    while (outputAt.length > 0) {
      const bit = this.firstInner + outputAt.length - 1
      if (bit !== module.nBits - 1 || module.items.data[outputAt.data[outputAt.length - 1]] === bit) break
      outputAt.length--
      module.bitSignal.length--
      module.bitIndex.length--
    }
  }

  private isInner(bit: number): boolean {
    return bit >= this.firstInner && this.module.bitSignal.data[bit] < 0
  }

  /** A new inner net, driven by the gate whose output stands at that place in the items. */
  private newInner(outputAt: number): number {
    const { module } = this
    const bit = module.nBits
    while (this.firstInner + this.outputAt.length < bit) this.outputAt.push(0)
    this.outputAt.push(outputAt)
    module.bitSignal.push(UNNAMED)
    module.bitIndex.push(this.outputAt.length)
    return bit
  }

  private emitGate(kind: GateKind, inputs: readonly number[]): number {
    const { items } = this.module
    items.push(Operation.Gate)
    items.push(this.lexer.start)
    items.push(kind)
    const output = this.newInner(items.length)
    items.push(output)
    items.push(inputs.length)
    for (const input of inputs) items.push(input)
    return output
  }

  /** gate [ strength ] [ delay ] [ name ] "(" terminals ")" { "," … } ";" */
  private parseGates(word: Word): void {
    const { lexer } = this
    lexer.next()
    this.passStrength()
    this.passDelay()
    do {
      let place = lexer.start
      let name = -1
      if (lexer.token === Token.Name) {
        name = lexer.name
        lexer.next()
      }
      if (lexer.token === Sign.openBracket) this.unsupported(place, lexer.end, 'an array of gates')
      this.bits.length = 0
      this.firstInner = this.module.nBits
      this.outputAt.length = 0
      this.expect(Sign.open, `"(" before the terminals of ${word}`)
      if (name < 0) place = lexer.start
      const terminals: number[] = []
      do terminals.push(this.parseTerminal(word))
      while (this.accept(Sign.comma))
      const end = lexer.end
      this.expect(Sign.close, '"," or ")" after a terminal')
      if (name >= 0) this.nameInnerByInstance(name)
      else this.nameInner(Math.max(0, terminals[0]))
      this.addGate(word, terminals, place, end)
    } while (this.accept(Sign.comma))
    this.expect(Sign.semicolon, '";" or "," after the gate')
  }

  private parseTerminal(word: Word): number {
    const start = this.lexer.start
    const operand = this.parseExpression()
    if (operand.width !== 1) {
      this.fail(
        'width-mismatch',
        start,
        this.lexer.start,
        `a terminal of ${word} is one bit; this expression has ${operand.width}`,
      )
    }
    return this.bits.data[operand.at]
  }

  private addGate(word: Word, terminals: readonly number[], place: number, end: number): void {
    const { items } = this.module
    const kind = GATES[word]
    const isSingle = kind === GateKind.Buffer || kind === GateKind.Not
    const wanted = kind === undefined ? 3 : 2
    if (terminals.length < wanted || (kind === undefined && terminals.length > 3)) {
      this.fail(
        'pin-count',
        place,
        end,
        `${word} takes ${kind === undefined ? 'three' : 'an output and at least one input'}, found ` +
          `${terminals.length} terminal${terminals.length === 1 ? '' : 's'}`,
      )
    }
    if (kind === undefined) {
      const flags = THREE_STATE[word]
      const isThreeState = flags !== undefined
      this.checkOutput(terminals[0], place, end)
      items.push(isThreeState ? Operation.ThreeState : Operation.Switch)
      items.push(place)
      for (const bit of terminals) items.push(bit)
      items.push(flags ?? (word === 'pmos' ? 1 : 0))
      if (!isThreeState) this.module.hasSwitches = true
      return
    }
    const outputs = isSingle ? terminals.length - 1 : 1
    const inputs = isSingle ? terminals.slice(-1) : terminals.slice(1)
    for (let at = 0; at < outputs; at++) {
      this.checkOutput(terminals[at], place, end)
      items.push(Operation.Gate)
      items.push(place)
      items.push(kind)
      items.push(terminals[at])
      items.push(inputs.length)
      for (const bit of inputs) items.push(bit)
    }
  }

  private checkOutput(bit: number, place: number, end: number): void {
    if (bit < 0 || this.isInner(bit)) {
      this.fail('syntax', place, end, 'the output of a gate is no net that can be driven')
    }
  }

  /** module [ "#" … ] name "(" connections ")" { "," name "(" … ")" } ";" */
  private parseInstances(): void {
    const { lexer, module } = this
    const moduleName = lexer.name
    const start = lexer.start
    lexer.next()
    let hasOverride = false
    if (this.accept(Sign.hash)) {
      hasOverride = true
      if (lexer.token === Sign.open) this.passParentheses()
      else lexer.next()
    }
    do {
      const place = lexer.start
      if (lexer.token !== Token.Name) {
        if (lexer.token === Sign.open) {
          this.fail('syntax', place, lexer.end, `this instance of ${this.quotedName(moduleName)} has no name`)
        }
        this.failExpected(`the name of an instance of ${this.quotedName(moduleName)}`)
      }
      const instance = lexer.name
      lexer.next()
      if (lexer.token === Sign.openBracket) this.unsupported(place, lexer.end, 'an array of instances')
      this.bits.length = 0
      this.connections.length = 0
      this.firstInner = module.nBits
      this.outputAt.length = 0
      if (lexer.token !== Sign.open) {
        const meant = closestName(this.names.text(moduleName), STATEMENT_WORDS)
        this.fail(
          lexer.token === Token.End ? 'truncated' : 'syntax',
          start,
          lexer.end,
          `expected "(" after instance ${this.quotedName(instance)} of ${this.quotedName(moduleName)}, ` +
            `found ${lexer.tokenText()}`,
          meant === null ? undefined : `Did you mean ${quoted(meant)}?`,
        )
      }
      lexer.next()
      const count = this.parseConnections()
      this.expect(Sign.close, '"," or ")" after a connection')
      if (this.outputAt.length > 0) this.nameInnerByInstance(instance)
      const { items } = module
      items.push(Operation.Instance)
      items.push(place)
      items.push(moduleName)
      items.push(instance)
      items.push(hasOverride ? 1 : 0)
      items.push(count)
      const { data, length } = this.connections
      for (let at = 0; at < length; at++) items.push(data[at])
    } while (this.accept(Sign.comma))
    this.expect(Sign.semicolon, '";" or "," after the instance')
  }

  private nameInnerByInstance(name: number): void {
    const { bitSignal } = this.module
    for (let bit = this.firstInner; bit < this.firstInner + this.outputAt.length; bit++) {
      if (bitSignal.data[bit] === UNNAMED) bitSignal.data[bit] = -3 - 2 * name
    }
  }

  /** Fills `connections`: pin name or −1, number of bits, bits; returns how many there are. */
  private parseConnections(): number {
    const { lexer, connections, bits } = this
    if (lexer.token === Sign.close) return 0
    let count = 0
    const isNamed = lexer.token === Sign.dot
    do {
      let pin = -1
      let operand: Operand | null = null
      this.bits.length = 0
      if (isNamed) {
        this.expect(Sign.dot, '"." before the name of a pin')
        pin = this.expectName('the name of a pin')
        this.expect(Sign.open, '"(" after the name of a pin')
        if (lexer.token !== Sign.close) operand = this.parseExpression()
        this.expect(Sign.close, '")" after the connection')
      } else if (lexer.token === Sign.dot) {
        this.failExpected('a connection by position, as the first one is')
      } else if (lexer.token !== Sign.comma && lexer.token !== Sign.close) operand = this.parseExpression()
      connections.push(pin)
      if (operand === null) connections.push(0)
      else {
        connections.push(operand.width)
        for (let at = 0; at < operand.width; at++) connections.push(bits.data[operand.at + at])
      }
      count++
    } while (this.accept(Sign.comma))
    return count
  }

  /** "always" "@" "(" "posedge" net ")" assignments, which is a D flip-flop for each bit. */
  private parseAlways(): void {
    const { lexer } = this
    const start = lexer.start
    lexer.next()
    if (!this.accept(Sign.at)) this.failProcess('only "always @(posedge CLOCK) Q <= D;" is read', start)
    const hasList = this.accept(Sign.open)
    if (!hasList || this.word() !== 'posedge') {
      const found =
        this.word() === 'negedge' ? 'a flip-flop of the falling edge' : 'a sensitivity list of levels'
      this.failProcess(`only "always @(posedge CLOCK) Q <= D;" is read, found ${found}`, start)
    }
    lexer.next()
    const clock = this.parsePrimary()
    if (clock.width !== 1) this.failProcess('the clock of a flip-flop is one bit', start)
    const clockBit = this.bits.data[clock.at]
    if (lexer.token !== Sign.close) {
      this.failProcess('only one clock edge is read: no set, no reset, no second clock', start)
    }
    lexer.next()
    const isBlock = this.word() === 'begin'
    if (isBlock) {
      lexer.next()
      if (this.accept(Sign.colon)) this.expectName('the name of the block')
    }
    do {
      this.parseFlipFlop(clockBit, start)
    } while (isBlock && this.word() !== 'end' && lexer.token !== Token.End)
    if (isBlock) lexer.next()
  }

  private parseFlipFlop(clock: number, start: number): void {
    const { lexer, bits, module } = this
    if (lexer.token !== Token.Name && lexer.token !== Sign.openBrace) {
      const construct = this.word() ?? lexer.tokenText()
      this.failProcess(`"${construct}" in an always block is behavioural code; only "Q <= D;" is read`, start)
    }
    const place = lexer.start
    bits.length = 0
    this.firstInner = module.nBits
    this.outputAt.length = 0
    const target = this.parseTarget()
    if (lexer.token !== Token.LessOrEqual) {
      if (lexer.token === Sign.equals)
        this.failProcess('a blocking "=" in an always block; write "Q <= D;"', start)
      this.failExpected('"<=" after the flip-flop\'s output')
    }
    lexer.next()
    this.passDelay()
    const value = this.fit(this.parseExpression(), target.width, place)
    this.nameInner(bits.data[target.at])
    const { items } = module
    for (let at = 0; at < target.width; at++) {
      items.push(Operation.FlipFlop)
      items.push(place)
      items.push(clock)
      items.push(bits.data[target.at + at])
      items.push(bits.data[value.at + at])
    }
    this.expect(Sign.semicolon, '";" after the flip-flop')
  }

  // Expressions

  private parseExpression(): Operand {
    if (++this.nesting > MAX_NESTING) {
      this.fail('limit', this.lexer.start, this.lexer.end, `an expression nested deeper than ${MAX_NESTING}`)
    }
    const condition = this.parseBinary(1)
    let result = condition
    if (this.accept(Sign.question)) {
      const whenTrue = this.parseExpression()
      this.expect(Sign.colon, '":" of the conditional operator')
      result = this.select(this.isTrue(condition), whenTrue, this.parseExpression())
    }
    this.nesting--
    return result
  }

  /** Operators by falling binding strength: == and != (6), & (5), ^ and ~^ (4), | (3), && (2), || (1). */
  private parseBinary(minimum: number): Operand {
    let left = this.parseUnary()
    for (;;) {
      const operator = this.lexer.token
      const strength = binaryStrength(operator)
      if (strength === 0) this.refuseOperator(operator)
      if (strength < minimum) return left
      this.lexer.next()
      const right = this.parseBinary(strength + 1)
      left = this.combine(operator, left, right)
    }
  }

  private refuseOperator(operator: number): void {
    const name = ARITHMETIC.get(operator)
    if (name !== undefined) {
      const { start, end } = this.lexer
      this.unsupported(
        start,
        end,
        `the operator "${name}"`,
        'Netlists are read with bitwise operators and "?:" alone.',
      )
    }
  }

  private combine(operator: number, left: Operand, right: Operand): Operand {
    if (operator === Token.LogicalAnd || operator === Token.LogicalOr) {
      const kind = operator === Token.LogicalAnd ? GateKind.And : GateKind.Or
      return this.push([this.emitGate(kind, [this.isTrue(left), this.isTrue(right)])], false)
    }
    const width = Math.max(left.width, right.width)
    const a = this.fit(left, width, this.lexer.start)
    const b = this.fit(right, width, this.lexer.start)
    const isEquality = operator === Token.Equal || operator === Token.NotEqual
    const kind = isEquality ? GateKind.Xnor : gateOf(operator)
    const outputs: number[] = []
    for (let at = 0; at < width; at++) {
      outputs.push(this.emitGate(kind, [this.bits.data[a.at + at], this.bits.data[b.at + at]]))
    }
    if (!isEquality) return this.push(outputs, a.inverts || b.inverts || operator === Token.Xnor)
    const differs = operator === Token.NotEqual
    if (width === 1) {
      const { items } = this.module
      if (differs) items.data[this.outputAt.data[outputs[0] - this.firstInner] - 1] = GateKind.Xor
      return this.push(outputs, false)
    }
    return this.push([this.emitGate(differs ? GateKind.Nand : GateKind.And, outputs)], false)
  }

  private parseUnary(): Operand {
    const { lexer } = this
    const operator = lexer.token
    const isReduction =
      operator === Sign.and ||
      operator === Sign.or ||
      operator === Sign.xor ||
      operator === Token.Nand ||
      operator === Token.Nor ||
      operator === Token.Xnor
    if (operator === Sign.plus) {
      lexer.next()
      return this.nested(() => this.parseUnary())
    }
    if (!isReduction && operator !== Sign.tilde && operator !== Sign.bang) return this.parsePrimary()
    lexer.next()
    const operand = this.nested(() => this.parseUnary())
    const inputs = Array.from(this.bits.view(operand.at, operand.at + operand.width))
    if (operator === Sign.tilde) {
      const outputs = inputs.map((bit) => this.emitGate(GateKind.Not, [bit]))
      return this.push(outputs, true)
    }
    if (operator === Sign.bang) {
      const kind = inputs.length === 1 ? GateKind.Not : GateKind.Nor
      return this.push([this.emitGate(kind, inputs)], false)
    }
    if (inputs.length === 1 && (operator === Sign.and || operator === Sign.or || operator === Sign.xor)) {
      return { ...operand, isUnsized: false }
    }
    return this.push([this.emitGate(gateOf(operator), inputs)], false)
  }

  private nested(parse: () => Operand): Operand {
    if (++this.nesting > MAX_NESTING) {
      this.fail('limit', this.lexer.start, this.lexer.end, `an expression nested deeper than ${MAX_NESTING}`)
    }
    const operand = parse()
    this.nesting--
    return operand
  }

  /** One bit that is 1 where any bit of the operand is. */
  private isTrue(operand: Operand): number {
    const inputs = Array.from(this.bits.view(operand.at, operand.at + operand.width))
    return inputs.length === 1 ? inputs[0] : this.emitGate(GateKind.Or, inputs)
  }

  /** select ? whenTrue : whenFalse, bit by bit. */
  private select(select: number, whenTrue: Operand, whenFalse: Operand): Operand {
    const width = Math.max(whenTrue.width, whenFalse.width)
    const a = this.fit(whenTrue, width, this.lexer.start)
    const b = this.fit(whenFalse, width, this.lexer.start)
    const not = this.emitGate(GateKind.Not, [select])
    const outputs: number[] = []
    for (let at = 0; at < width; at++) {
      const one = this.bits.data[a.at + at]
      const zero = this.bits.data[b.at + at]
      const terms = [
        this.emitGate(GateKind.And, [select, one]),
        this.emitGate(GateKind.And, [not, zero]),
        this.emitGate(GateKind.And, [one, zero]),
      ]
      outputs.push(this.emitGate(GateKind.Or, terms))
    }
    return this.push(outputs, a.inverts || b.inverts)
  }

  private push(bits: readonly number[], inverts: boolean): Operand {
    const at = this.bits.length
    for (const bit of bits) this.bits.push(bit)
    return { at, width: bits.length, inverts, isUnsized: false }
  }

  /** The operand at that width: zeros before it, or its leftmost bits cut off, with a warning where that is not clear. */
  private fit(operand: Operand, width: number, place: number): Operand {
    if (operand.width === width) return operand
    const end = Math.max(place + 1, this.lexer.start)
    if (width > operand.width) {
      if (operand.inverts) {
        this.fail(
          'width-mismatch',
          place,
          end,
          `an inverted expression of ${operand.width} bits is used where ${width} are wanted, which inverts padding too`,
          'Write both sides with the same width.',
        )
      }
      if (!operand.isUnsized) this.warnWidth(operand.width, width, place, end)
      const at = this.bits.length
      this.bits.fill(ConstantBit.Zero, width - operand.width)
      for (let bit = 0; bit < operand.width; bit++) this.bits.push(this.bits.data[operand.at + bit])
      return { ...operand, at, width }
    }
    if (!operand.isUnsized) this.warnWidth(operand.width, width, place, end)
    return { ...operand, at: operand.at + operand.width - width, width }
  }

  private warnWidth(found: number, wanted: number, start: number, end: number): void {
    const what = found < wanted ? 'zeros are put before it' : 'its leftmost bits are left out'
    this.findings.warn(
      'width-mismatch',
      this.source,
      start,
      end,
      `an expression of ${found} bit${found === 1 ? '' : 's'} is used where ${wanted} are wanted; ${what}`,
    )
  }

  private parsePrimary(): Operand {
    const { lexer } = this
    switch (lexer.token) {
      case Token.Name:
        return this.parseNet()
      case Token.Number:
      case Token.Based:
        return this.parseNumber()
      case Sign.open: {
        lexer.next()
        const inner = this.parseExpression()
        this.expect(Sign.close, '")"')
        return inner
      }
      case Sign.openBrace:
        return this.nested(() => this.parseConcatenation())
      case Token.Macro:
        return this.unsupported(
          lexer.start,
          lexer.end,
          `the text macro ${lexer.tokenText()}`,
          'Run a preprocessor over the file first.',
        )
      case Token.String:
        return this.unsupported(lexer.start, lexer.end, 'a string in an expression')
      case Token.System:
        return this.unsupported(lexer.start, lexer.end, `the system function ${lexer.tokenText()}`)
      default:
        this.refuseOperator(lexer.token)
        return this.failExpected('a net, a constant or an expression')
    }
  }

  /** name [ "[" constant [ (":" | "+:" | "-:") constant ] "]" ] */
  private parseNet(): Operand {
    const { lexer, module } = this
    const place = lexer.start
    const name = lexer.name
    lexer.next()
    const parameter = this.parameters.get(name)
    let signal = this.signalNamed(name)
    if (signal < 0 && parameter !== undefined) {
      module.usesParameters = true
      return this.pushInteger(parameter, 32, true)
    }
    if (lexer.token === Sign.dot) this.unsupported(place, lexer.end, 'a hierarchical name')
    if (lexer.token === Sign.open) this.unsupported(place, lexer.end, 'a function call')
    if (signal < 0) {
      signal = module.addSignal(name, SignalFlag.Implicit, 0, 0, false, place)
      this.noteSignal(name, signal)
    }
    module.signalFlags.data[signal] |= USED
    if (lexer.token !== Sign.openBracket) return this.signalOperand(signal)
    lexer.next()
    const first = this.parseConstant()
    let last = first
    const msb = module.signalMsb.data[signal]
    const lsb = module.signalLsb.data[signal]
    const isDescending = msb >= lsb
    let left = first
    if (this.accept(Sign.colon)) {
      last = this.parseConstant()
    } else if (lexer.token === Token.PlusColon || lexer.token === Token.MinusColon) {
      const isUp = lexer.token === Token.PlusColon
      lexer.next()
      const width = this.parseConstant()
      if (width < 1) this.fail('syntax', place, lexer.end, `a part of ${width} bits`)
      const other = isUp ? first + width - 1 : first - width + 1
      left = isDescending ? Math.max(first, other) : Math.min(first, other)
      last = isDescending ? Math.min(first, other) : Math.max(first, other)
    }
    const end = lexer.end
    this.expect(Sign.closeBracket, '"]" after the index')
    if (lexer.token === Sign.openBracket) this.unsupported(place, lexer.end, 'a second index')
    if (module.signalIsVector.data[signal] === 0) {
      this.fail(
        'syntax',
        place,
        end,
        `${this.quotedName(name)} has one bit and no index`,
        this.suggestVector(name),
      )
    }
    const low = Math.min(msb, lsb)
    const high = Math.max(msb, lsb)
    if (left < low || left > high || last < low || last > high) {
      this.fail(
        'out-of-range',
        place,
        end,
        `index ${left < low || left > high ? left : last} is outside ${this.quotedName(name)}, which is [${msb}:${lsb}]`,
      )
    }
    if (left !== last && left > last !== isDescending) {
      this.fail('syntax', place, end, `[${left}:${last}] runs against the direction of [${msb}:${lsb}]`)
    }
    const from = module.signalBit.data[signal] + Math.abs(left - msb)
    return this.pushRun(from, Math.abs(left - last) + 1)
  }

  private signalOperand(signal: number): Operand {
    return this.pushRun(this.module.signalBit.data[signal], this.module.widthOf(signal))
  }

  private pushRun(from: number, width: number): Operand {
    const at = this.bits.length
    for (let bit = from; bit < from + width; bit++) this.bits.push(bit)
    return { at, width, inverts: false, isUnsized: false }
  }

  /** "{" expression { "," expression } "}" or "{" count "{" … "}" "}" */
  private parseConcatenation(): Operand {
    const { lexer, bits } = this
    const start = lexer.start
    lexer.next()
    const parts: number[] = []
    const first = this.parseExpression()
    if (lexer.token === Sign.openBrace) {
      const count = this.integerOf(first, start)
      const inner = this.nested(() => this.parseConcatenation())
      this.expect(Sign.closeBrace, '"}" after the replication')
      if (count < 1 || count * inner.width > MAX_WIDTH) {
        this.fail(
          'limit',
          start,
          lexer.start,
          `a replication into ${count * inner.width} bits; 1 to ${MAX_WIDTH} are read`,
        )
      }
      const at = bits.length
      for (let copy = 0; copy < count; copy++) {
        for (let bit = 0; bit < inner.width; bit++) bits.push(bits.data[inner.at + bit])
      }
      return { at, width: count * inner.width, inverts: false, isUnsized: false }
    }
    const add = (part: Operand): void => {
      if (part.isUnsized)
        this.fail('syntax', start, lexer.start, 'a constant without a size in a concatenation')
      for (let bit = 0; bit < part.width; bit++) parts.push(bits.data[part.at + bit])
    }
    add(first)
    while (this.accept(Sign.comma)) add(this.parseExpression())
    this.expect(Sign.closeBrace, '"," or "}" in the concatenation')
    this.checkWidth(parts.length, start, lexer.start)
    return this.push(parts, false)
  }

  private integerOf(operand: Operand, start: number): number {
    let value = 0
    for (let at = operand.at; at < operand.at + operand.width; at++) {
      const bit = this.bits.data[at]
      if (bit !== ConstantBit.Zero && bit !== ConstantBit.One) {
        this.fail('syntax', start, this.lexer.start, 'expected a constant number of copies')
      }
      value = value * 2 + (bit === ConstantBit.One ? 1 : 0)
    }
    return value
  }

  /** [ size ] "'" base digits, or decimal digits, which stand for 32 bits. */
  private parseNumber(): Operand {
    const { lexer } = this
    const { text } = this.source
    const start = lexer.start
    let size = 32
    let isSized = false
    if (lexer.token === Token.Number) {
      const digits = text.slice(lexer.start, lexer.end).replaceAll('_', '')
      lexer.next()
      if (lexer.token !== Token.Based) {
        if (!/^\d+$/.test(digits)) this.unsupported(start, lexer.start, 'a real number')
        return this.pushInteger(Number(digits), 32, true)
      }
      size = Number(digits)
      isSized = true
      if (!(size >= 1) || size > MAX_WIDTH) {
        this.fail('limit', start, lexer.end, `a constant of ${digits} bits; 1 to ${MAX_WIDTH} are read`)
      }
    }
    const body = text
      .slice(lexer.start + 1, lexer.end)
      .replace(/[\s_]/g, '')
      .toLowerCase()
      .replace(/^s/, '')
    const end = lexer.end
    lexer.next()
    const base = body[0]
    const digits = body.slice(1)
    const perDigit = base === 'b' ? 1 : base === 'o' ? 3 : base === 'h' ? 4 : 0
    if (digits === '' || (perDigit === 0 && base !== 'd')) {
      this.fail('syntax', start, end, 'expected a base (b, o, d or h) and digits after the apostrophe')
    }
    const bits =
      perDigit === 0 ? this.decimalBits(digits, start, end) : this.digitBits(digits, perDigit, start, end)
    const fill =
      bits[0] === ConstantBit.Unknown || bits[0] === ConstantBit.Open ? bits[0] : (ConstantBit.Zero as number)
    const padded =
      bits.length < size
        ? [...new Array<number>(size - bits.length).fill(fill), ...bits]
        : bits.slice(bits.length - size)
    return { ...this.push(padded, false), isUnsized: !isSized }
  }

  private digitBits(digits: string, perDigit: number, start: number, end: number): number[] {
    const bits: number[] = []
    for (const digit of digits) {
      const special =
        digit === 'x' ? ConstantBit.Unknown : digit === 'z' || digit === '?' ? ConstantBit.Open : 0
      const value = special === 0 ? parseInt(digit, 16) : 0
      if (value >= 1 << perDigit)
        this.fail('syntax', start, end, `the digit "${digit}" does not exist in this base`)
      for (let bit = perDigit - 1; bit >= 0; bit--) {
        bits.push(special !== 0 ? special : (value >> bit) & 1 ? ConstantBit.One : ConstantBit.Zero)
      }
    }
    return bits
  }

  private decimalBits(digits: string, start: number, end: number): number[] {
    if (digits === 'x') return [ConstantBit.Unknown]
    if (digits === 'z' || digits === '?') return [ConstantBit.Open]
    if (!/^\d+$/.test(digits)) this.fail('syntax', start, end, `"${digits}" is no decimal number`)
    if (digits.length > 400) this.fail('limit', start, end, `a decimal number of ${digits.length} digits`)
    const bits = BigInt(digits).toString(2)
    return Array.from(bits, (bit) => (bit === '1' ? ConstantBit.One : ConstantBit.Zero))
  }

  private pushInteger(value: number, width: number, isUnsized: boolean): Operand {
    const bits: number[] = []
    for (let bit = width - 1; bit >= 0; bit--) {
      bits.push(Math.floor(value / 2 ** bit) % 2 !== 0 ? ConstantBit.One : ConstantBit.Zero)
    }
    return { ...this.push(bits, false), isUnsized }
  }

  /** An integer constant: numbers and parameters with + − * / % and parentheses. */
  private parseConstant(): number {
    const { start } = this.lexer
    const value = this.parseSum()
    if (!Number.isSafeInteger(value) || Math.abs(value) > 2 ** 31 - 1) {
      this.fail('out-of-range', start, this.lexer.start, `the constant ${value} is out of range`)
    }
    return value
  }

  private parseSum(): number {
    let value = this.parseProduct()
    for (;;) {
      if (this.accept(Sign.plus)) value += this.parseProduct()
      else if (this.accept(Sign.minus)) value -= this.parseProduct()
      else return value
    }
  }

  private parseProduct(): number {
    let value = this.parseFactor()
    for (;;) {
      if (this.accept(Sign.star)) value *= this.parseFactor()
      else if (this.accept(Sign.slash)) value = Math.trunc(value / this.parseFactor())
      else if (this.accept(Sign.percent)) value %= this.parseFactor()
      else return value
    }
  }

  private parseFactor(): number {
    const { lexer } = this
    if (++this.nesting > MAX_NESTING) {
      this.fail('limit', lexer.start, lexer.end, `an expression nested deeper than ${MAX_NESTING}`)
    }
    let value: number
    if (this.accept(Sign.minus)) value = -this.parseFactor()
    else if (this.accept(Sign.open)) {
      value = this.parseSum()
      this.expect(Sign.close, '")"')
    } else if (lexer.token === Token.Name) {
      const parameter = this.parameters.get(lexer.name)
      if (parameter === undefined) {
        this.fail(
          'unknown-name',
          lexer.start,
          lexer.end,
          `${this.quotedName(lexer.name)} is no integer parameter; an index is a constant in a netlist`,
        )
      }
      this.module.usesParameters = true
      value = parameter
      lexer.next()
    } else if (lexer.token === Token.Number || lexer.token === Token.Based) {
      const start = lexer.start
      value = this.integerOf(this.parseNumber(), start)
    } else return this.failExpected('an integer constant')
    this.nesting--
    return value
  }

  // Passing over

  /** "(" strength [ "," strength ] ")", which is passed over; anything else in parentheses is left alone. */
  private passStrength(): void {
    const { lexer } = this
    if (lexer.token !== Sign.open) return
    const text = this.source.text.slice(lexer.end, lexer.end + 64)
    const first = /^\s*([a-z]+[01]?)\b/.exec(text)?.[1]
    if (first !== undefined && STRENGTHS.has(first as Word)) this.passParentheses()
  }

  /** "#" delay: a number, a name or a list in parentheses. */
  private passDelay(): void {
    if (!this.accept(Sign.hash)) return
    if (this.lexer.token === Sign.open) this.passParentheses()
    else this.lexer.next()
  }

  private passParentheses(): void {
    const { lexer } = this
    const { start, end } = lexer
    let depth = 0
    do {
      if (lexer.token === Sign.open) depth++
      else if (lexer.token === Sign.close) depth--
      else if (lexer.token === Token.End || lexer.token === Sign.semicolon) {
        this.fail('syntax', start, end, 'this "(" has no ")"')
      }
      lexer.next()
    } while (depth > 0)
  }

  private passBlock(end: Word): void {
    const { lexer } = this
    const place = lexer.start
    const placeEnd = lexer.end
    while (this.word() !== end) {
      if (lexer.token === Token.End) this.fail('truncated', place, placeEnd, `this block has no "${end}"`)
      lexer.next()
    }
    lexer.next()
  }

  /** Reports a construct that is not read and moves behind its end. */
  private skipBlock(end: Word, message: string): void {
    const { start, end: wordEnd } = this.lexer
    this.error(
      'unsupported-construct',
      start,
      wordEnd,
      message,
      'Netlists are read, not behaviour: synthesise it first.',
    )
    this.skipTo(end)
    if (this.word() === end) this.lexer.next()
  }

  private skipTo(end: Word): void {
    while (this.lexer.token !== Token.End && this.word() !== end) {
      if (end !== 'endmodule' && end !== 'module' && this.word() === 'endmodule') return
      this.lexer.next()
    }
  }

  private skipStatement(): void {
    const { lexer } = this
    while (lexer.token !== Sign.semicolon) {
      const word = this.word()
      if (lexer.token === Token.End || word === 'endmodule' || word === 'module') return
      lexer.next()
    }
    lexer.next()
  }

  /** Reports behavioural code and moves behind the whole process, `begin … end` and all. */
  private failProcess(message: string, start: number = this.lexer.start): never {
    this.error(
      'unsupported-construct',
      start,
      Math.max(start + 1, this.source.text.startsWith('always', start) ? start + 6 : this.lexer.end),
      message,
      'Netlists are read, not behaviour: synthesise it first.',
    )
    const { lexer } = this
    let depth = 0
    for (;;) {
      const word = this.word()
      if (lexer.token === Token.End || word === 'endmodule' || word === 'module') break
      if (word === 'begin' || word === 'case' || word === 'casex' || word === 'casez' || word === 'fork')
        depth++
      else if (word === 'end' || word === 'endcase' || word === 'join') depth--
      const isEnd = depth <= 0 && (lexer.token === Sign.semicolon || word === 'end' || word === 'endcase')
      lexer.next()
      if (isEnd && this.word() !== 'else') break
    }
    throw new SkippedError()
  }

  // Names, tokens and findings

  private word(): Word | null {
    return this.lexer.token === Token.Keyword ? wordOf(this.lexer.name) : null
  }

  private accept(sign: number): boolean {
    if (this.lexer.token !== sign) return false
    this.lexer.next()
    return true
  }

  private expect(sign: number, what: string): void {
    if (this.lexer.token !== sign) this.failExpected(what)
    this.lexer.next()
  }

  private expectName(what: string): number {
    const { lexer } = this
    if (lexer.token !== Token.Name) this.failExpected(what)
    const { name } = lexer
    lexer.next()
    return name
  }

  private signalNamed(name: number): number {
    return name < this.signalOf.length ? this.signalOf[name] - 1 : -1
  }

  private noteSignal(name: number, signal: number): void {
    if (name >= this.signalOf.length) {
      const larger = new Int32Array(Math.max(name + 1, this.signalOf.length * 2))
      larger.set(this.signalOf)
      this.signalOf = larger
    }
    this.signalOf[name] = signal + 1
  }

  private portNames(): string[] {
    const { module } = this
    return Array.from(module.ports.view(), (signal) => this.names.text(module.signalName.data[signal]))
  }

  private suggest(name: number, candidates: Iterable<string>): string | undefined {
    const close = closestName(this.names.text(name), candidates)
    return close === null ? undefined : `Did you mean ${quoted(close)}?`
  }

  private suggestVector(name: number): string | undefined {
    const { module } = this
    const vectors: string[] = []
    for (let signal = 0; signal < module.nSignals && vectors.length < 10_000; signal++) {
      if (module.signalIsVector.data[signal] !== 0)
        vectors.push(this.names.text(module.signalName.data[signal]))
    }
    return this.suggest(name, vectors)
  }

  private quotedName(name: number): string {
    return quoted(this.names.text(name))
  }

  private reportProgress(): boolean {
    const at = this.lexer.start
    if (at < this.nextProgress) return true
    this.nextProgress = at + PROGRESS_STEP
    if (this.onProgress?.(at, this.source.text.length) === false) this.isCancelled = true
    return !this.isCancelled
  }

  private error(code: DiagnosticCode, start: number, end: number, message: string, hint?: string): void {
    this.findings.error(code, this.source, start, Math.max(end, start), message, { hint: hint ?? null })
  }

  private fail(code: DiagnosticCode, start: number, end: number, message: string, hint?: string): never {
    this.error(code, start, end, message, hint)
    throw new StatementError()
  }

  private unsupported(start: number, end: number, what: string, hint?: string): never {
    return this.fail('unsupported-construct', start, end, `${what} is not supported`, hint)
  }

  private reportExpected(what: string): void {
    const { lexer } = this
    const isEnd = lexer.token === Token.End
    this.error(
      isEnd ? 'truncated' : 'syntax',
      lexer.start,
      lexer.end,
      `expected ${what}, found ${lexer.tokenText()}`,
      isEnd ? 'The file may have been cut off; compare its size with the original.' : undefined,
    )
  }

  private failExpected(what: string): never {
    this.reportExpected(what)
    throw new StatementError()
  }
}

type Range = { msb: number; lsb: number }

/** Set in signalFlags once a statement has used the signal. */
const USED = 1 << 16
/** In bitSignal, until the statement's owner is known. */
const UNNAMED = -1

/** Words that a statement may have begun with, for a misspelled one. */
const STATEMENT_WORDS: readonly Word[] = [
  'assign',
  'input',
  'output',
  'inout',
  'wire',
  'endmodule',
  'supply0',
  'supply1',
]

const ARITHMETIC: ReadonlyMap<number, string> = new Map([
  [Sign.plus, '+'],
  [Sign.minus, '-'],
  [Sign.star, '*'],
  [Sign.slash, '/'],
  [Sign.percent, '%'],
  [Sign.less, '<'],
  [Sign.greater, '>'],
  [Token.LessOrEqual, '<='],
  [Token.GreaterOrEqual, '>='],
  [Token.ShiftLeft, '<<'],
  [Token.ShiftRight, '>>'],
  [Token.Power, '**'],
])

/** How strongly a binary operator binds, by IEEE 1364-2005, table 5-4; 0 for what is none of those read. */
function binaryStrength(token: number): number {
  switch (token) {
    case Token.Equal:
    case Token.NotEqual:
      return 6
    case Sign.and:
      return 5
    case Sign.xor:
    case Token.Xnor:
      return 4
    case Sign.or:
      return 3
    case Token.LogicalAnd:
      return 2
    case Token.LogicalOr:
      return 1
    default:
      return 0
  }
}

function gateOf(operator: number): GateKind {
  switch (operator) {
    case Sign.and:
      return GateKind.And
    case Sign.or:
      return GateKind.Or
    case Sign.xor:
      return GateKind.Xor
    case Token.Nand:
      return GateKind.Nand
    case Token.Nor:
      return GateKind.Nor
    case Token.Xnor:
      return GateKind.Xnor
    default:
      throw new RangeError(`token ${operator} is no gate`)
  }
}
