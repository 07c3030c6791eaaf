import { quoted } from '../../source/finding-list.ts'
import type { Span } from '../../source/source.ts'
import { expandData } from './expand-data.ts'
import type { Lexer } from './lexer.ts'
import { Token } from './lexer.ts'
import { readName, type SignalNames } from './signal-names.ts'
import type { Assignment, Statement } from './statement.ts'
import type { StilFindings } from './stil-findings.ts'

const COLON = 58
const SEMICOLON = 59
const EQUALS = 61
const OPEN = 123
const CLOSE = 125

const MAX_DEPTH = 64

/** Statements that neither move a value nor take a cycle. */
const SILENT = new Set([
  'Ann',
  'X',
  'IddqTestPoint',
  'IDDQTestPoint',
  'ScanChain',
  'ActiveScanChains',
  'TimeUnit',
])

const UNSUPPORTED = new Set(['Goto', 'If', 'While', 'For', 'Else', 'LoopData', 'BreakPointIf'])

/**
 * Reads the statements of patterns, procedures and macros one by one (IEEE 1450-1999, clause 22):
 *
 *     statement = [ label ":" ] ( ("V" | "Vector" | "C" | "Condition" | "F" | "Fixed") "{" { assignment } "}"
 *               | ("W" | "WaveformTable") name ";" | ("Call" | "Macro") name ( ";" | "{" { assignment } "}" )
 *               | "Shift" "{" { statement } "}" | "Loop" count "{" { statement } "}"
 *               | "MatchLoop" ( count | "Infinite" ) "{" { statement } "}" | "BreakPoint" ( ";" | "{" { statement } "}" )
 *               | "Stop" ";" | "Goto" label ";" | "IddqTestPoint" ";" | "Ann" "{*" text "*}" )
 *     assignment = reference "=" data ";"
 */
export class StatementReader {
  private readonly lexer: Lexer
  private readonly names: SignalNames
  private readonly findings: StilFindings

  constructor(lexer: Lexer, names: SignalNames, findings: StilFindings) {
    this.lexer = lexer
    this.names = names
    this.findings = findings
  }

  /** The statement that the current token starts, or null at the end of the block, whose "}" stays the current token. */
  next(depth = 0): Statement | null {
    const { lexer } = this
    for (;;) {
      if (lexer.isKind(CLOSE) || lexer.isKind(Token.End)) return null
      if (lexer.isKind(SEMICOLON) || lexer.isKind(Token.Annotation)) {
        lexer.next()
        continue
      }
      if (!lexer.isKind(Token.Word) && !lexer.isKind(Token.Quoted)) lexer.unexpected('a pattern statement')
      if (lexer.isKind(Token.Quoted) || lexer.peek() === COLON) {
        lexer.next()
        lexer.expect(COLON, '":" after a label')
        continue
      }
      const statement = this.keyword(depth)
      if (statement !== null) return statement
    }
  }

  /** The statements up to the closing brace, which is taken. */
  block(depth: number): Statement[] {
    const { lexer } = this
    if (depth > MAX_DEPTH) {
      this.findings.fail('limit', lexer.source, lexer.span, `statements nested deeper than ${MAX_DEPTH}`)
    }
    lexer.expect(OPEN, '"{"')
    const body: Statement[] = []
    for (let statement = this.next(depth); statement !== null; statement = this.next(depth))
      body.push(statement)
    lexer.expect(CLOSE, '"}"')
    return body
  }

  private keyword(depth: number): Statement | null {
    const { lexer } = this
    const span = lexer.span
    const word = lexer.value
    lexer.next()
    switch (word) {
      case 'V':
      case 'Vector':
        return { kind: 'vector', span, assignments: this.assignments() }
      case 'C':
      case 'Condition':
        return { kind: 'condition', span, assignments: this.assignments() }
      case 'F':
      case 'Fixed':
        return { kind: 'fixed', span, assignments: this.assignments() }
      case 'W':
      case 'WaveformTable': {
        const name = readName(lexer, 'the name of a waveform table')
        this.endStatement()
        return { kind: 'table', span, name }
      }
      case 'Call':
      case 'Macro': {
        const start = lexer.start
        const name = readName(lexer, `the name of a ${word === 'Call' ? 'procedure' : 'macro'}`)
        const nameEnd = lexer.lastEnd
        const assignments = this.lexer.isKind(OPEN) ? this.assignments() : []
        if (this.lexer.isKind(SEMICOLON)) lexer.next()
        const place = { start, end: nameEnd }
        return { kind: word === 'Call' ? 'call' : 'macro', span: place, name, assignments }
      }
      case 'Shift':
        return { kind: 'shift', span, body: this.block(depth + 1) }
      case 'Loop': {
        const count = this.count()
        return { kind: 'loop', span, count, body: this.block(depth + 1) }
      }
      case 'MatchLoop':
        if (this.lexer.isKind(Token.Word)) lexer.next()
        return { kind: 'match-loop', span, body: this.block(depth + 1) }
      case 'Stop':
        this.endStatement()
        return { kind: 'stop', span }
      case 'BreakPoint':
        if (this.lexer.isKind(OPEN)) return { kind: 'loop', span, count: 1, body: this.block(depth + 1) }
        this.endStatement()
        return null
      default:
        if (SILENT.has(word)) this.skip()
        else this.unsupported(word, span)
        return null
    }
  }

  private unsupported(word: string, span: Span): void {
    const { lexer, findings } = this
    if (!UNSUPPORTED.has(word)) {
      findings.fail(
        'syntax',
        lexer.source,
        span,
        `expected a pattern statement such as V, W, C, F, Call, Macro, Loop or Shift, found ${quoted(word)}`,
      )
    }
    findings.report(
      'unsupported-construct',
      lexer.source,
      span,
      `${word} changes which vectors run, and is not supported in patterns`,
      'Let the pattern be written out without it.',
    )
    this.skip()
  }

  private assignments(): Assignment[] {
    const { lexer } = this
    lexer.expect(OPEN, '"{"')
    const assignments: Assignment[] = []
    while (!this.lexer.isKind(CLOSE)) {
      if (this.lexer.isKind(SEMICOLON)) {
        lexer.next()
        continue
      }
      assignments.push(this.assignment())
    }
    lexer.next()
    return assignments
  }

  private assignment(): Assignment {
    const { lexer } = this
    const { source, start } = lexer
    let reference: string
    let end = lexer.end
    if (this.lexer.isKind(Token.Expression)) {
      reference = lexer.text.slice(lexer.start, lexer.end)
      lexer.next()
    } else {
      reference = readName(lexer, 'the name of a signal or group')
      end = lexer.lastEnd
    }
    const span = { start, end }
    if (!this.lexer.isKind(EQUALS)) lexer.unexpected('"="')
    const stop = lexer.readDataRun()
    const { text, start: first, end: last } = lexer
    if (stop === SEMICOLON) {
      lexer.next()
      lexer.next()
      return { source, span, reference, text, start: first, end: last }
    }
    const width = (): number => this.names.find(reference, { source, span }).length
    const base = (): string => this.names.group(reference)?.base ?? ''
    const expanded = expandData(lexer, stop, this.findings, { width, base })
    lexer.next()
    if (!this.lexer.isKind(SEMICOLON)) lexer.unexpected('waveform characters or ";"')
    lexer.next()
    return { source, span, reference, text: expanded, start: 0, end: expanded.length }
  }

  private count(): number {
    const { lexer } = this
    const text = lexer.isKind(Token.Expression)
      ? lexer.value.trim()
      : this.lexer.isKind(Token.Word)
        ? lexer.value
        : ''
    if (!/^\d{1,15}$/.test(text)) lexer.unexpected('how many times the loop runs')
    lexer.next()
    return Number(text)
  }

  private endStatement(): void {
    this.lexer.expect(SEMICOLON, '";"')
  }

  /** Past a statement of no interest: up to its ";", or its block, or its annotation. */
  private skip(): void {
    const { lexer } = this
    while (!this.lexer.isKind(SEMICOLON) && !this.lexer.isKind(CLOSE) && !this.lexer.isKind(Token.End)) {
      if (this.lexer.isKind(OPEN)) {
        lexer.skipBraces()
        lexer.next()
        return
      }
      const annotated = this.lexer.isKind(Token.Annotation)
      lexer.next()
      if (annotated) return
    }
    if (this.lexer.isKind(SEMICOLON)) lexer.next()
  }
}
