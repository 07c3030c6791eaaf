import type { FindingList } from '../../source/finding-list.ts'
import { quoted } from '../../source/finding-list.ts'
import type { Source } from '../../source/source.ts'
import { KEYWORD_COUNT } from './keywords.ts'
import { hashStep, type NameTable } from './name-table.ts'

/**
 * Kinds of tokens. A sign of one character is its own character code (33 to 126), so `lexer.token === SIGN.semicolon`
 * compares numbers.
 */
export const Token = {
  End: 0 as number,
  Name: 1 as number,
  Keyword: 2 as number,
  /** Decimal digits, perhaps the size of a based number that follows, perhaps with a fraction. */
  Number: 3 as number,
  /** From the apostrophe on, such as 'hFF or 'sb1. */
  Based: 4 as number,
  String: 5 as number,
  /** A system task such as $display. */
  System: 6 as number,
  /** The use of a text macro, such as `WIDTH. */
  Macro: 7 as number,
  Unknown: 8 as number,
  Nand: 130 as number,
  Nor: 131 as number,
  Xnor: 132 as number,
  LogicalAnd: 133 as number,
  LogicalOr: 134 as number,
  Equal: 135 as number,
  NotEqual: 136 as number,
  LessOrEqual: 137 as number,
  GreaterOrEqual: 138 as number,
  ShiftLeft: 139 as number,
  ShiftRight: 140 as number,
  PlusColon: 141 as number,
  MinusColon: 142 as number,
  Power: 143 as number,
  Arrow: 144 as number,
}

export const Sign = {
  bang: 33 as number, hash: 35 as number, percent: 37 as number, and: 38 as number, open: 40 as number, close: 41 as number, star: 42 as number, plus: 43 as number, comma: 44 as number, minus: 45 as number, dot: 46 as number,
  slash: 47 as number, colon: 58 as number, semicolon: 59 as number, less: 60 as number, equals: 61 as number, greater: 62 as number, question: 63 as number, at: 64 as number, openBracket: 91 as number,
  closeBracket: 93 as number, xor: 94 as number, openBrace: 123 as number, or: 124 as number, closeBrace: 125 as number, tilde: 126 as number,
} // prettier-ignore

const MAX_NAME = 4096
const MAX_CONDITIONALS = 64

const START = 1
const DIGIT = 2
const BLANK = 4
const CLASS = new Uint8Array(128)
for (let code = 0; code < 128; code++) {
  if ((code >= 65 && code <= 90) || (code >= 97 && code <= 122) || code === 95) CLASS[code] = START
  else if (code >= 48 && code <= 57) CLASS[code] = DIGIT
  else if (code <= 32) CLASS[code] = BLANK
}
const DOLLAR = 36
const QUOTE = 34
const APOSTROPHE = 39
const BACKSLASH = 92
const BACKTICK = 96

/** Directives that change nothing in a netlist; the rest of their line is passed over. */
const PASSED_OVER = new Set([
  'timescale', 'default_nettype', 'resetall', 'celldefine', 'endcelldefine', 'unconnected_drive',
  'nounconnected_drive', 'line', 'begin_keywords', 'end_keywords', 'pragma', 'suppress_faults', 'enable_portfaults',
  'disable_portfaults', 'nosuppress_faults', 'delay_mode_distributed', 'delay_mode_path', 'delay_mode_unit',
  'delay_mode_zero', 'default_decay_time', 'default_trireg_strength', 'protect', 'endprotect', 'undef',
]) // prettier-ignore

type Conditional = {
  readonly start: number
  readonly isOuterActive: boolean
  wasTaken: boolean
  isActive: boolean
}

/**
 * Turns Verilog text (IEEE 1364-2005, clause 3 and 19) into tokens, one at a time and without an object a token: after
 * `next()` the fields tell what stands there. Comments, attributes and directives are passed over like white space; text
 * that `ifdef` leaves out is not read, with only this text's own `define`s being known.
 */
export class VerilogLexer {
  token = 0
  /** Offset of the token, and of the character after it. */
  start = 0
  end = 0
  /** The name's id, for Name and Keyword. */
  name = -1
  readonly source: Source
  private at = 0
  private readonly text: string
  private readonly textNumber: number
  private readonly names: NameTable
  private readonly findings: FindingList
  private readonly defined = new Set<string>()
  private readonly conditionals: Conditional[] = []

  constructor(source: Source, names: NameTable, findings: FindingList) {
    this.source = source
    this.text = source.text
    this.names = names
    this.textNumber = names.addText(source.text)
    this.findings = findings
    if (this.text.charCodeAt(0) === 0xfeff) this.at = 1
  }

  /** Moves to the next token. */
  next(): void {
    const { text } = this
    const length = text.length
    for (;;) {
      let at = this.at
      let code = 0
      while (at < length && (code = text.charCodeAt(at)) <= 32) at++
      this.at = at
      this.start = at
      if (at >= length) {
        this.finishText()
        return
      }
      if (code < 128 && CLASS[code] === START) {
        let hash = code
        at++
        while (at < length) {
          code = text.charCodeAt(at)
          if (code >= 128 || ((CLASS[code] & 3) === 0 && code !== DOLLAR)) break
          hash = (Math.imul(hash, 31) + code) | 0
          at++
        }
        this.acceptName(at, hash)
        if (this.name < KEYWORD_COUNT) this.token = Token.Keyword
        return
      }
      if (code < 128 && CLASS[code] === DIGIT) {
        this.readNumber()
        return
      }
      if (code === Sign.slash) {
        const following = text.charCodeAt(at + 1)
        if (following === Sign.slash) {
          this.at = this.endOfLine(at)
          continue
        }
        if (following === Sign.star) {
          this.skipPast('*/', at + 2, 'comment')
          continue
        }
      } else if (code === BACKSLASH) {
        let hash = 0
        this.start = at
        at++
        while (at < length && (code = text.charCodeAt(at)) > 32) {
          hash = hashStep(hash, code)
          at++
        }
        this.start++
        this.acceptName(at, hash)
        this.start--
        if (at === this.start + 1) {
          this.token = Token.Unknown
        }
        return
      } else if (code === Sign.open && text.charCodeAt(at + 1) === Sign.star) {
        let after = at + 2
        while (text.charCodeAt(after) <= 32) after++
        if (text.charCodeAt(after) !== Sign.close) {
          this.skipAttribute(at + 2)
          continue
        }
      } else if (code === BACKTICK) {
        if (this.readDirective()) return
        continue
      } else if (code === QUOTE) {
        this.readString()
        return
      } else if (code === APOSTROPHE) {
        this.readBased()
        return
      } else if (code === DOLLAR) {
        this.at = this.wordEnd(at + 1)
        this.accept(Token.System, this.at)
        return
      }
      this.readSign(code)
      return
    }
  }

  /** The token as it stands in the text, for messages. */
  tokenText(): string {
    return this.token === Token.End ? 'the end of the file' : quoted(this.text.slice(this.start, this.end))
  }

  private accept(token: number, end: number): void {
    this.token = token
    this.end = end
    this.at = end
  }

  private acceptName(end: number, hash: number): void {
    if (end - this.start > MAX_NAME) {
      this.findings.error(
        'limit',
        this.source,
        this.start,
        end,
        `a name of ${end - this.start} characters; at most ${MAX_NAME} are read`,
      )
    }
    this.name = this.names.intern(this.textNumber, this.start, end, hash)
    this.accept(Token.Name, end)
  }

  private finishText(): void {
    this.accept(Token.End, this.text.length)
    const open = this.conditionals.pop()
    this.conditionals.length = 0
    if (open) {
      this.findings.error(
        'truncated',
        this.source,
        open.start,
        open.start + 6,
        'this conditional directive has no `endif',
        { hint: 'The file may have been cut off; compare its size with the original.' },
      )
    }
  }

  private readNumber(): void {
    const { text } = this
    let at = this.start
    while (isNumberPart(text.charCodeAt(at))) at++
    if (text.charCodeAt(at) === Sign.dot && CLASS[text.charCodeAt(at + 1)] === DIGIT) {
      at++
      while (isNumberPart(text.charCodeAt(at))) at++
    }
    const exponent = text.charCodeAt(at) | 32
    if (exponent === 101) {
      let after = at + 1
      const sign = text.charCodeAt(after)
      if (sign === Sign.plus || sign === Sign.minus) after++
      if (CLASS[text.charCodeAt(after)] === DIGIT) {
        at = after
        while (isNumberPart(text.charCodeAt(at))) at++
      }
    }
    this.accept(Token.Number, at)
  }

  private readBased(): void {
    const { text } = this
    let at = this.start + 1
    if ((text.charCodeAt(at) | 32) === 115) at++
    at++
    while (text.charCodeAt(at) === 32) at++
    const digits = at
    while (isDigitOfAnyBase(text.charCodeAt(at))) at++
    if (at === digits) at = Math.min(this.start + 1, text.length)
    this.accept(Token.Based, Math.min(at, text.length))
  }

  private readString(): void {
    const { text } = this
    let at = this.start + 1
    while (at < text.length) {
      const code = text.charCodeAt(at)
      if (code === QUOTE) {
        this.accept(Token.String, at + 1)
        return
      }
      if (code === 10 || code === 13) break
      at += code === BACKSLASH ? 2 : 1
    }
    const end = Math.min(at, text.length)
    this.findings.error(
      'syntax',
      this.source,
      this.start,
      end,
      'this string has no closing quote on its line',
    )
    this.accept(Token.String, end)
  }

  private readSign(code: number): void {
    const { text, start } = this
    const following = text.charCodeAt(start + 1)
    let token = code
    switch (code) {
      case Sign.tilde:
        if (following === Sign.and) token = Token.Nand
        else if (following === Sign.or) token = Token.Nor
        else if (following === Sign.xor) token = Token.Xnor
        break
      case Sign.xor:
        if (following === Sign.tilde) token = Token.Xnor
        break
      case Sign.and:
        if (following === Sign.and) token = Token.LogicalAnd
        break
      case Sign.or:
        if (following === Sign.or) token = Token.LogicalOr
        break
      case Sign.equals:
        if (following === Sign.equals) token = Token.Equal
        break
      case Sign.bang:
        if (following === Sign.equals) token = Token.NotEqual
        break
      case Sign.less:
        if (following === Sign.equals) token = Token.LessOrEqual
        else if (following === Sign.less) token = Token.ShiftLeft
        break
      case Sign.greater:
        if (following === Sign.equals) token = Token.GreaterOrEqual
        else if (following === Sign.greater) token = Token.ShiftRight
        break
      case Sign.plus:
        if (following === Sign.colon) token = Token.PlusColon
        break
      case Sign.minus:
        if (following === Sign.colon) token = Token.MinusColon
        else if (following === Sign.greater) token = Token.Arrow
        break
      case Sign.star:
        if (following === Sign.star) token = Token.Power
        break
    }
    if (code < 33 || code > 126) this.accept(Token.Unknown, start + 1)
    else this.accept(token, token === code ? start + 1 : start + 2)
  }

  /** Passes a directive; true where it is a macro's use, which is a token of its own. */
  private readDirective(): boolean {
    const start = this.at
    const wordEnd = this.wordEnd(start + 1)
    const word = this.text.slice(start + 1, wordEnd)
    this.start = start
    this.end = wordEnd
    switch (word) {
      case 'define': {
        const name = this.operandAt(wordEnd)
        if (name !== '') this.defined.add(name)
        this.at = this.endOfDefinition(wordEnd)
        return false
      }
      case 'ifdef':
      case 'ifndef':
        this.openConditional(start, this.defined.has(this.operandAt(wordEnd)) === (word === 'ifdef'))
        return false
      case 'elsif':
      case 'else':
      case 'endif':
        this.at = this.endOfOperand(wordEnd, word === 'elsif')
        this.turnConditional(word, this.operandAt(wordEnd))
        return false
      case 'include':
        this.at = this.endOfLine(start)
        this.findings.error(
          'unsupported-construct',
          this.source,
          start,
          this.at,
          'an `include: files are read as they are given, none is looked for',
          { hint: 'Remove the line and give the included file as another netlist file.' },
        )
        return false
    }
    if (PASSED_OVER.has(word)) {
      this.at = this.endOfLine(start)
      if (word === 'undef') this.defined.delete(this.operandAt(wordEnd))
      return false
    }
    this.accept(Token.Macro, wordEnd)
    return true
  }

  private openConditional(start: number, isTrue: boolean): void {
    if (this.conditionals.length === MAX_CONDITIONALS) {
      this.findings.error(
        'limit',
        this.source,
        start,
        this.end,
        `conditional directives nested deeper than ${MAX_CONDITIONALS}`,
      )
      this.at = this.text.length
      this.conditionals.length = 0
      return
    }
    this.at = this.endOfOperand(this.end, true)
    const isOuterActive = this.conditionals.at(-1)?.isActive ?? true
    const isActive = isOuterActive && isTrue
    this.conditionals.push({ start, isOuterActive, wasTaken: isActive, isActive })
    if (!isActive) this.skipInactive()
  }

  private turnConditional(word: string, name: string): void {
    const conditional = this.conditionals.at(-1)
    if (conditional === undefined) {
      this.findings.error(
        'syntax',
        this.source,
        this.start,
        this.end,
        `\`${word} without an \`ifdef or \`ifndef before it`,
      )
      return
    }
    if (word === 'endif') {
      this.conditionals.pop()
    } else {
      const isTrue = word === 'else' || this.defined.has(name)
      conditional.isActive = conditional.isOuterActive && !conditional.wasTaken && isTrue
      if (conditional.isActive) conditional.wasTaken = true
    }
    if (!(this.conditionals.at(-1)?.isActive ?? true)) this.skipInactive()
  }

  /** Moves over text that is left out, up to the directive that may end it. */
  private skipInactive(): void {
    const { text } = this
    let at = this.at
    let depth = 0
    while (at < text.length) {
      const code = text.charCodeAt(at)
      if (code === Sign.slash && text.charCodeAt(at + 1) === Sign.slash) at = this.endOfLine(at)
      else if (code === Sign.slash && text.charCodeAt(at + 1) === Sign.star) {
        const close = text.indexOf('*/', at + 2)
        at = close < 0 ? text.length : close + 2
      } else if (code === BACKTICK) {
        const word = text.slice(at + 1, this.wordEnd(at + 1))
        if (word === 'ifdef' || word === 'ifndef') depth++
        else if (depth === 0 && (word === 'else' || word === 'elsif' || word === 'endif')) break
        else if (word === 'endif') depth--
        at += word.length + 1
      } else at++
    }
    this.at = at
  }

  private skipPast(close: string, from: number, what: string): void {
    const found = this.text.indexOf(close, from)
    if (found >= 0) {
      this.at = found + close.length
      return
    }
    this.at = this.text.length
    this.findings.error(
      'truncated',
      this.source,
      this.start,
      this.start + 2,
      `this ${what} has no closing "${close}"`,
      { hint: `Close the ${what}, or compare the file's size with the original: it may have been cut off.` },
    )
  }

  /** Passes `(* … *)`, whose strings may hold anything. */
  private skipAttribute(from: number): void {
    const { text } = this
    for (let at = from; at < text.length; at++) {
      const code = text.charCodeAt(at)
      if (code === QUOTE) {
        at++
        while (at < text.length && text.charCodeAt(at) !== QUOTE)
          at += text.charCodeAt(at) === BACKSLASH ? 2 : 1
      } else if (code === Sign.star && text.charCodeAt(at + 1) === Sign.close) {
        this.at = at + 2
        return
      }
    }
    this.skipPast('*)', text.length, 'attribute')
  }

  private wordEnd(from: number): number {
    let at = from
    for (;;) {
      const code = this.text.charCodeAt(at)
      if (!(code < 128) || ((CLASS[code] & 3) === 0 && code !== DOLLAR)) return at
      at++
    }
  }

  private operandStart(from: number): number {
    let at = from
    while (this.text.charCodeAt(at) === 32 || this.text.charCodeAt(at) === 9) at++
    return at
  }

  private operandAt(from: number): string {
    const start = this.operandStart(from)
    return this.text.slice(start, this.wordEnd(start))
  }

  private endOfOperand(from: number, hasOperand: boolean): number {
    return hasOperand ? this.wordEnd(this.operandStart(from)) : from
  }

  private endOfLine(from: number): number {
    const { text } = this
    let at = from
    while (at < text.length) {
      const code = text.charCodeAt(at)
      if (code === 10 || code === 13) return at
      at++
    }
    return at
  }

  /** The end of a macro's text, which goes on where its line ends in a backslash. */
  private endOfDefinition(from: number): number {
    let end = this.endOfLine(from)
    while (end < this.text.length && this.text.charCodeAt(end - 1) === BACKSLASH) {
      const crlf = this.text.charCodeAt(end) === 13 && this.text.charCodeAt(end + 1) === 10
      end = this.endOfLine(end + (crlf ? 2 : 1))
    }
    return end
  }
}

function isNumberPart(code: number): boolean {
  return (code >= 48 && code <= 57) || code === 95
}

/** 0-9 a-f A-F x X z Z ? _ */
function isDigitOfAnyBase(code: number): boolean {
  const lower = code | 32
  return (
    isNumberPart(code) ||
    (lower >= 97 && lower <= 102) ||
    lower === 120 ||
    lower === 122 ||
    code === Sign.question
  )
}
