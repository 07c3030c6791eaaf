import { ExpressionReader, type Operand } from './expression-reader.ts'
import type { Word } from './keywords.ts'
import { Sign, Token } from './lexer.ts'
import { Operation, PORT_FLAGS, SignalFlag } from './parsed-module.ts'

export const NET_TYPES: ReadonlySet<Word> = new Set([
  'wire',
  'tri',
  'supply0',
  'supply1',
  'reg',
  'trireg',
  'uwire',
])
export const WIRED_TYPES: ReadonlySet<Word> = new Set(['wand', 'wor', 'triand', 'trior', 'tri0', 'tri1'])

type Range = { msb: number; lsb: number }

/** Reads a module's header and declarations (IEEE 1364-2005, clauses 4 and 12.3). */
export class DeclarationReader extends ExpressionReader {
  protected checkPorts(): void {
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

  /** [ "#(" … ")" ] [ "(" ports ")" ] ";" */
  protected parseHeader(): void {
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
      if (this.signalNamed(name) >= 0) {
        this.fail(
          'duplicate-declaration',
          place,
          lexer.start,
          `port ${this.quotedName(name)} is listed twice`,
        )
      }
      const signal = this.module.addSignal(name, SignalFlag.Implicit, 0, 0, false, place)
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
    return (this.module.signalFlags.data[signal] & SignalFlag.Used) !== 0
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

  protected parsePortDeclaration(): void {
    const flags = this.parseDirection() | SignalFlag.Typed
    const range = this.parseNetType()
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
    this.expect(Sign.semicolon, '";" or "," after the port')
  }

  protected parseNetDeclaration(word: Word): void {
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

  protected parseParameters(): void {
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
    const isReal =
      lexer.token === Token.Number && this.source.text.slice(lexer.start, lexer.end).includes('.')
    if (lexer.token === Token.String || isReal) {
      lexer.next()
      return
    }
    this.parameters.set(name, this.parseConstant())
  }

  private portNames(): string[] {
    const { module } = this
    return Array.from(module.ports.view(), (signal) => this.names.text(module.signalName.data[signal]))
  }

  /** Connects an expression's bits to a target's, the last of each first: Verilog pads and cuts at the left. */
  protected assign(target: Operand, value: Operand, place: number): void {
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
}
