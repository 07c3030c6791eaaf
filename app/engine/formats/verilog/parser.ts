import { GateKind } from '../../circuit/circuit.ts'
import { IntList } from '../../circuit/int-list.ts'
import { closestName } from '../../source/closest-name.ts'
import { quoted, type FindingList } from '../../source/finding-list.ts'
import type { ReadingProgress } from '../../source/reading-progress.ts'
import type { Source } from '../../source/source.ts'
import { DeclarationReader, NET_TYPES, WIRED_TYPES } from './declaration-reader.ts'
import type { Operand } from './expression-reader.ts'
import type { Word } from './keywords.ts'
import { Sign, Token } from './lexer.ts'
import type { NameTable } from './name-table.ts'
import { Operation, ParsedModule } from './parsed-module.ts'
import { SkippedError, StatementError } from './token-reader.ts'

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

/**
 * Parses the netlist subset of IEEE 1364-2005 into modules:
 *
 *     source      = { module | "primitive" … }
 *     module      = ("module" | "macromodule") name [ "#(" … ")" ] [ "(" ports ")" ] ";" { statement } "endmodule"
 *     statement   = direction | net declaration | parameter | assign | gate | instance | flip-flop | specify block
 *     flip-flop   = "always" "@" "(" "posedge" net ")" target "<=" expression ";"
 *     expression  = the bitwise, logical, reduction and equality operators, "?:", selects, concatenation, replication
 *
 * What an expression becomes, ExpressionReader says.
 * After an error reading goes on behind the next semicolon.
 */
export class VerilogParser extends DeclarationReader {
  readonly modules: ParsedModule[] = []
  private readonly onProgress: ReadingProgress | undefined
  private readonly connections = new IntList(256)
  private nextProgress = PROGRESS_STEP
  private isCancelled = false

  constructor(
    source: Source,
    names: NameTable,
    findings: FindingList,
    onProgress: ReadingProgress | undefined,
  ) {
    super(source, names, findings)
    this.onProgress = onProgress
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
    this.beginModule(new ParsedModule(lexer.name, this.source, place))
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

  /** Runs one statement's parser; after an error moves behind the next semicolon. */
  private statement(parse: () => void): void {
    const before = this.lexer.start
    const itemsBefore = this.module.items.length
    this.connections.length = 0
    this.nesting = 0
    this.beginExpressions()
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

  private parseAssign(): void {
    this.lexer.next()
    this.passStrength()
    this.passDelay()
    do {
      const place = this.lexer.start
      this.beginExpressions()
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
      this.beginExpressions()
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
      this.connections.length = 0
      this.beginExpressions()
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
    this.beginExpressions()
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

  private reportProgress(): boolean {
    const at = this.lexer.start
    if (at < this.nextProgress) return true
    this.nextProgress = at + PROGRESS_STEP
    if (this.onProgress?.(at, this.source.text.length) === false) this.isCancelled = true
    return !this.isCancelled
  }
}
