import { closestName } from '../../source/closest-name.ts'
import type { DiagnosticCode } from '../../source/diagnostic.ts'
import { quoted, type FindingList } from '../../source/finding-list.ts'
import type { Source } from '../../source/source.ts'
import { wordOf, type Word } from './keywords.ts'
import { Sign, Token, VerilogLexer } from './lexer.ts'
import type { NameTable } from './name-table.ts'

const STRENGTHS: ReadonlySet<Word> = new Set([
  'supply0', 'supply1', 'strong0', 'strong1', 'pull0', 'pull1', 'weak0', 'weak1', 'highz0', 'highz1', 'small', 'medium',
  'large',
]) // prettier-ignore

/** Thrown at an error from which reading goes on after the statement; the finding is already recorded. */
export class StatementError extends Error {}

/** Thrown where the parser has already moved behind the construct in error. */
export class SkippedError extends StatementError {}

/** The parser's dealings with tokens: what stands there, what must stand there, what is passed over, and findings. */
export class TokenReader {
  protected readonly lexer: VerilogLexer
  protected readonly source: Source
  protected readonly names: NameTable
  protected readonly findings: FindingList

  constructor(source: Source, names: NameTable, findings: FindingList) {
    this.source = source
    this.names = names
    this.findings = findings
    this.lexer = new VerilogLexer(source, names, findings)
  }

  protected word(): Word | null {
    return this.lexer.token === Token.Keyword ? wordOf(this.lexer.name) : null
  }

  protected accept(sign: number): boolean {
    if (this.lexer.token !== sign) return false
    this.lexer.next()
    return true
  }

  protected expect(sign: number, what: string): void {
    if (this.lexer.token !== sign) this.failExpected(what)
    this.lexer.next()
  }

  protected expectName(what: string): number {
    const { lexer } = this
    if (lexer.token !== Token.Name) this.failExpected(what)
    const { name } = lexer
    lexer.next()
    return name
  }

  protected suggest(name: number, candidates: Iterable<string>): string | undefined {
    const close = closestName(this.names.text(name), candidates)
    return close === null ? undefined : `Did you mean ${quoted(close)}?`
  }

  protected quotedName(name: number): string {
    return quoted(this.names.text(name))
  }

  protected error(code: DiagnosticCode, start: number, end: number, message: string, hint?: string): void {
    this.findings.error(code, this.source, start, Math.max(end, start), message, { hint: hint ?? null })
  }

  protected fail(code: DiagnosticCode, start: number, end: number, message: string, hint?: string): never {
    this.error(code, start, end, message, hint)
    throw new StatementError()
  }

  protected unsupported(start: number, end: number, what: string, hint?: string): never {
    return this.fail('unsupported-construct', start, end, `${what} is not supported`, hint)
  }

  protected reportExpected(what: string): void {
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

  protected failExpected(what: string): never {
    this.reportExpected(what)
    throw new StatementError()
  }

  /** "(" strength [ "," strength ] ")", which is passed over; anything else in parentheses is left alone. */
  protected passStrength(): void {
    const { lexer } = this
    if (lexer.token !== Sign.open) return
    const text = this.source.text.slice(lexer.end, lexer.end + 64)
    const first = /^\s*([a-z]+[01]?)\b/.exec(text)?.[1]
    if (first !== undefined && STRENGTHS.has(first as Word)) this.passParentheses()
  }

  /** "#" delay: a number, a name or a list in parentheses. */
  protected passDelay(): void {
    if (!this.accept(Sign.hash)) return
    if (this.lexer.token === Sign.open) this.passParentheses()
    else this.lexer.next()
  }

  protected passParentheses(): void {
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

  protected passBlock(end: Word): void {
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
  protected skipBlock(end: Word, message: string): void {
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

  protected skipTo(end: Word): void {
    while (this.lexer.token !== Token.End && this.word() !== end) {
      if (end !== 'endmodule' && end !== 'module' && this.word() === 'endmodule') return
      this.lexer.next()
    }
  }

  protected skipStatement(): void {
    const { lexer } = this
    while (lexer.token !== Sign.semicolon) {
      const word = this.word()
      if (lexer.token === Token.End || word === 'endmodule' || word === 'module') return
      lexer.next()
    }
    lexer.next()
  }

  /** Reports behavioural code and moves behind the whole process, `begin … end` and all. */
  protected failProcess(message: string, start: number = this.lexer.start): never {
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
}
