import { GateKind } from '../../circuit/circuit.ts'
import { IntList } from '../../circuit/int-list.ts'
import type { FindingList } from '../../source/finding-list.ts'
import type { Source } from '../../source/source.ts'
import { Sign, Token } from './lexer.ts'
import type { NameTable } from './name-table.ts'
import { ConstantBit, Operation, ParsedModule, SignalFlag } from './parsed-module.ts'
import { TokenReader } from './token-reader.ts'

const MAX_WIDTH = 1 << 16
const MAX_BITS = 1 << 28
const MAX_NESTING = 400

/** A stretch of the parser's bit stack, msb first. `inverts`: a wider context would change it, so it is not extended. */
export type Operand = { at: number; width: number; inverts: boolean; isUnsized: boolean }

/**
 * Reads expressions (IEEE 1364-2005, clause 5) into bits and gates of the module at hand.
 *
 *     expression  = binary [ "?" expression ":" expression ]
 *     binary      = unary { operator unary }                 == != & ^ ~^ | && || by their binding strength
 *     unary       = { "~" | "!" | "&" | "|" | "^" | "~&" | "~|" | "~^" } primary
 *     primary     = net [ "[" select "]" ] | constant | "(" expression ")" | "{" … "}"
 *
 * Each operator becomes one gate for each bit, so each is a line of the netlist as if it had been written as a gate;
 * constant zeros on both sides, which padding makes, need none. Inner nets are named after the target, `z:1`, `z:2`, in
 * the order in which they are evaluated. `a ? b : c` becomes an inverter, three AND gates and an OR gate,
 * `a&b | ~a&c | b&c`: the third term keeps equal data bits known while the select is not, as IEEE 1364-2005, 5.1.13,
 * demands.
 */
export class ExpressionReader extends TokenReader {
  protected module: ParsedModule
  /** Integer parameters of the module, by name. */
  protected readonly parameters: Map<number, number> = new Map()
  /** A stack of bits, on which operands are stretches. Each statement begins with it empty. */
  protected readonly bits: IntList = new IntList(256)
  protected nesting = 0
  /** Where the gate that drives an inner net of this statement stands in the items, by net minus `firstInner`. */
  protected readonly outputAt: IntList = new IntList()
  protected firstInner = 0
  /** Per name id: its signal in the module that is being read, plus one; 0 where it has none. */
  private signalOf = new Int32Array(4096)

  constructor(source: Source, names: NameTable, findings: FindingList) {
    super(source, names, findings)
    this.module = new ParsedModule(-1, source, 0)
  }

  /** Goes on to another module. */
  protected beginModule(module: ParsedModule): void {
    for (const name of this.module.signalName.view()) this.signalOf[name] = 0
    this.module = module
    this.parameters.clear()
  }

  /** Forgets the bits and inner nets of the statement before. */
  protected beginExpressions(): void {
    this.bits.length = 0
    this.firstInner = this.module.nBits
    this.outputAt.length = 0
  }

  protected checkWidth(width: number, start: number, end: number): void {
    if (width > MAX_WIDTH || this.module.nBits + width > MAX_BITS) {
      this.fail('limit', start, end, `${width} bits in one signal; at most ${MAX_WIDTH} are read`)
    }
  }

  /** Names the inner nets of this statement after its target. */
  protected nameInner(owner: number): void {
    const { bitSignal } = this.module
    for (let bit = this.firstInner; bit < this.firstInner + this.outputAt.length; bit++) {
      if (bitSignal.data[bit] === UNNAMED) bitSignal.data[bit] = -2 - 2 * owner
    }
  }

  protected nameInnerByInstance(name: number): void {
    const { bitSignal } = this.module
    for (let bit = this.firstInner; bit < this.firstInner + this.outputAt.length; bit++) {
      if (bitSignal.data[bit] === UNNAMED) bitSignal.data[bit] = -3 - 2 * name
    }
  }

  /** Takes back inner nets at the end that a target replaced. */
  protected dropUnusedInner(): void {
    const { module, outputAt } = this
    while (outputAt.length > 0) {
      const bit = this.firstInner + outputAt.length - 1
      if (bit !== module.nBits - 1 || module.items.data[outputAt.data[outputAt.length - 1]] === bit) break
      outputAt.length--
      module.bitSignal.length--
      module.bitIndex.length--
    }
  }

  protected isInner(bit: number): boolean {
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

  protected parseExpression(): Operand {
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
      const [one, other] = [this.bits.data[a.at + at], this.bits.data[b.at + at]]
      const isPadding = one === ConstantBit.Zero && other === ConstantBit.Zero
      // 0 op 0 is 1 for the inverting operators, 0 for the others.
      const ofPadding = kind === GateKind.Xnor ? ConstantBit.One : ConstantBit.Zero
      outputs.push(isPadding && !isEquality ? ofPadding : this.emitGate(kind, [one, other]))
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
      if (one === ConstantBit.Zero && zero === ConstantBit.Zero) {
        outputs.push(ConstantBit.Zero)
        continue
      }
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
  protected fit(operand: Operand, width: number, place: number): Operand {
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

  protected parsePrimary(): Operand {
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
    module.signalFlags.data[signal] |= SignalFlag.Used
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

  protected signalOperand(signal: number): Operand {
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
  protected parseConstant(): number {
    const { start } = this.lexer
    const value = this.parseSum()
    if (!Number.isSafeInteger(value) || Math.abs(value) > 2 ** 31 - 1) {
      const what = Number.isFinite(value)
        ? `the constant ${value} is out of range`
        : 'the constant divides by 0'
      this.fail('out-of-range', start, this.lexer.start, what)
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

  protected signalNamed(name: number): number {
    return name < this.signalOf.length ? this.signalOf[name] - 1 : -1
  }

  protected noteSignal(name: number, signal: number): void {
    if (name >= this.signalOf.length) {
      const larger = new Int32Array(Math.max(name + 1, this.signalOf.length * 2))
      larger.set(this.signalOf)
      this.signalOf = larger
    }
    this.signalOf[name] = signal + 1
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
}

/** In bitSignal, until the statement's owner is known. */
const UNNAMED = -1

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
