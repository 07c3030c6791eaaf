import type { Source, Span } from '../../source/source.ts'
import type { StilFindings } from './stil-findings.ts'

/** Kinds of token; a punctuation token's kind is its character code, all of which are larger. */
export const Token = { End: 0, Word: 1, Quoted: 2, Expression: 3, Annotation: 4 } as const

const QUOTE = 34
const APOSTROPHE = 39
const STAR = 42
const SLASH = 47
const SEMICOLON = 59
const BACKSLASH = 92
const OPEN = 123
const CLOSE = 125

/** The longest name that IEEE 1450-1999 allows (clause 6.6). */
const MAX_NAME = 1024

const IS_WORD = new Uint8Array(128)
for (const sign of 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789_.$#%?') {
  IS_WORD[sign.charCodeAt(0)] = 1
}

/**
 * Cuts STIL text (IEEE 1450-1999, clause 6) into tokens, on character codes and without copying: the current token is
 * `kind` and its place `start` to `end`. Comments `/* … *\/` and `// …` are white space. Vector data are not tokens:
 * `readDataRun` takes them whole.
 */
export class Lexer {
  readonly source: Source
  readonly text: string
  kind = 0
  start = 0
  end = 0
  /** Where the token before the current one ends. */
  lastEnd = 0
  private at: number
  private readonly limit: number
  private readonly findings: StilFindings

  constructor(source: Source, findings: StilFindings, from = 0, limit: number = source.text.length) {
    this.source = source
    this.text = source.text
    this.findings = findings
    this.at = from
    this.limit = limit
  }

  /** Moves to the next token and returns its kind. */
  next(): number {
    const { text } = this
    this.lastEnd = this.end
    const code = this.skipBlank()
    this.start = this.at
    if (code < 0) {
      this.end = this.at
      return (this.kind = Token.End)
    }
    if (code < 128 ? IS_WORD[code] === 1 : true) {
      let at = this.at + 1
      while (at < this.limit) {
        const sign = text.charCodeAt(at)
        if (sign < 128 && IS_WORD[sign] === 0) break
        at++
      }
      this.end = this.at = at
      if (at - this.start > MAX_NAME) this.tooLong()
      return (this.kind = Token.Word)
    }
    if (code === QUOTE) return this.quoted()
    if (code === APOSTROPHE) {
      const close = text.indexOf("'", this.at + 1)
      if (close < 0 || close >= this.limit) this.unclosed('expression', "'")
      this.end = this.at = close + 1
      return (this.kind = Token.Expression)
    }
    if (code === OPEN && text.charCodeAt(this.at + 1) === STAR) {
      const close = text.indexOf('*}', this.at + 2)
      if (close < 0 || close >= this.limit) this.unclosed('annotation', '*}')
      this.end = this.at = close + 2
      return (this.kind = Token.Annotation)
    }
    this.end = ++this.at
    return (this.kind = code)
  }

  /** The kind of the token after the current one, which stays current. */
  peek(): number {
    const { kind, start, end, lastEnd, at } = this
    const next = this.next()
    this.lastEnd = lastEnd
    this.kind = kind
    this.start = start
    this.end = end
    this.at = at
    return next
  }

  get span(): Span {
    return { start: this.start, end: this.end }
  }

  /** The current token's text, without its quotes. */
  get value(): string {
    const inner = this.kind === Token.Quoted || this.kind === Token.Expression ? 1 : 0
    return this.text.slice(this.start + inner, this.end - inner)
  }

  isKind(kind: number): boolean {
    return this.kind === kind
  }

  is(word: string): boolean {
    return (
      this.kind === Token.Word &&
      this.end - this.start === word.length &&
      this.text.startsWith(word, this.start)
    )
  }

  /** Takes the current token, or gives up the statement with what was found instead. */
  expect(kind: number, what: string): void {
    if (this.kind !== kind) this.unexpected(what)
    this.next()
  }

  unexpected(what: string, hint?: string): never {
    const ended = this.kind === Token.End
    const found = ended ? 'the end of the file' : shown(this.text.slice(this.start, this.end))
    this.findings.fail(
      ended ? 'truncated' : 'syntax',
      this.source,
      this.span,
      `expected ${what}, found ${found}`,
      hint ?? (ended ? 'The file may have been cut off; compare its size with the original.' : undefined),
    )
  }

  /**
   * Takes a run of waveform characters after the current token, which is `=` or another run's end: start and end are set
   * to it, possibly empty, and the code of the next character that is not white space is returned, −1 at the end of the
   * text. White space before the run is passed over, unless the run must be `adjacent`.
   */
  readDataRun(adjacent = false): number {
    if (!adjacent) this.skipBlank()
    const { text, limit } = this
    let at = this.at
    this.start = at
    let code = -1
    for (; at < limit; at++) {
      code = text.charCodeAt(at)
      if (code >= 128 || IS_WORD[code] === 0) break
    }
    this.end = this.at = at
    if (at === limit) return -1
    return code <= 32 || code === SLASH || code >= 128 ? this.skipBlank() : code
  }

  /** Steps over one character inside vector data, such as `\` and the letter after it. */
  readSign(): number {
    return this.at < this.limit ? this.text.charCodeAt(this.at++) : -1
  }

  /**
   * From an opening brace as the current token, moves past its closing brace and returns where that stands. Reads no
   * tokens: only strings, expressions, annotations and comments are told apart.
   */
  skipBraces(): number {
    const { text, limit } = this
    let depth = 1
    for (;;) {
      const code = this.skipBlank()
      if (code < 0) {
        this.kind = Token.End
        this.start = this.end = limit
        this.unexpected('"}"')
      }
      if (code === OPEN || code === QUOTE || code === APOSTROPHE) {
        this.next()
        if (this.kind === OPEN) depth++
      } else if (code === CLOSE) {
        this.at++
        if (--depth === 0) {
          this.start = this.at - 1
          this.end = this.at
          this.kind = CLOSE
          return this.start
        }
      } else {
        let at = this.at + 1
        while (at < limit) {
          const sign = text.charCodeAt(at)
          if (sign === CLOSE || sign === OPEN || sign === QUOTE || sign === APOSTROPHE || sign === SLASH)
            break
          at++
        }
        this.at = at
      }
    }
  }

  /**
   * After an error in the statement at `from`: moves past the statement's ";" or block, or, inside a block, up to the "}"
   * that closes it, and takes what it finds on the way for granted. False where the text ends first.
   */
  skipStatement(from: number, inBlock: boolean): boolean {
    const { text, limit } = this
    let depth = 0
    let at = from
    for (; at < limit; at++) {
      const code = text.charCodeAt(at)
      if (code === SLASH && text.charCodeAt(at + 1) === SLASH) at = orLimit(text.indexOf('\n', at), limit)
      else if (code === SLASH && text.charCodeAt(at + 1) === STAR)
        at = orLimit(text.indexOf('*/', at + 2), limit) + 1
      else if (code === QUOTE || code === APOSTROPHE) at = endOfQuote(text, at, code)
      else if (code === OPEN && text.charCodeAt(at + 1) === STAR)
        at = orLimit(text.indexOf('*}', at), limit) + 1
      else if (code === OPEN) depth++
      else if (code === SEMICOLON && depth === 0) break
      else if (code === CLOSE && depth-- <= 1) break
    }
    const closesOuter = inBlock && depth < 0
    this.at = Math.min(limit, closesOuter ? at : at + 1)
    this.kind = SEMICOLON
    this.start = this.end = this.at
    return at < limit
  }

  private skipBlank(): number {
    const { text, limit } = this
    let at = this.at
    while (at < limit) {
      const code = text.charCodeAt(at)
      if (code <= 32 || code === 0xfeff || code === 0xa0) {
        at++
      } else if (code === SLASH && text.charCodeAt(at + 1) === SLASH) {
        const close = text.indexOf('\n', at)
        at = close < 0 ? limit : close + 1
      } else if (code === SLASH && text.charCodeAt(at + 1) === STAR) {
        const close = text.indexOf('*/', at + 2)
        if (close < 0) {
          this.at = this.start = at
          this.unclosed('comment', '*/')
        }
        at = close + 2
      } else {
        this.at = at
        return code
      }
    }
    this.at = limit
    return -1
  }

  private quoted(): number {
    const { text, limit } = this
    for (let at = this.at + 1; at < limit; at++) {
      const code = text.charCodeAt(at)
      if (code === BACKSLASH) at++
      else if (code === 10 || code === 13) break
      else if (code === QUOTE) {
        this.end = this.at = at + 1
        return (this.kind = Token.Quoted)
      }
    }
    this.at++
    this.end = this.at
    this.kind = QUOTE
    this.findings.fail(
      'syntax',
      this.source,
      this.span,
      'a string is not closed on its line; expected a closing "',
      'Close it with a double quotation mark; expressions of signals stand in apostrophes.',
    )
  }

  private unclosed(what: string, sign: string): never {
    const span = { start: this.start, end: Math.min(this.start + 2, this.limit) }
    this.at = this.limit
    this.end = this.limit
    this.kind = Token.End
    this.findings.fail('truncated', this.source, span, `the ${what} is not closed; expected ${sign}`)
  }

  private tooLong(): void {
    this.findings.report(
      'limit',
      this.source,
      this.span,
      `a name of ${this.end - this.start} characters; at most ${MAX_NAME} are read`,
    )
  }
}

function orLimit(at: number, limit: number): number {
  return at < 0 ? limit : at
}

/** Where a string that opens at `at` closes on its line; `at` itself where it does not. */
function endOfQuote(text: string, at: number, quote: number): number {
  for (let end = at + 1; end < text.length; end++) {
    const code = text.charCodeAt(end)
    if (code === quote) return end
    if (code === 10 || code === 13) return at
  }
  return at
}

function shown(text: string): string {
  const first = text.split(/[\r\n]/, 1)[0] ?? ''
  return first.startsWith('"') || first.startsWith("'")
    ? first.length <= 60
      ? first
      : `${first.slice(0, 57)}…`
    : `"${first.slice(0, 60)}"`
}
