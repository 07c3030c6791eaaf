import { quoted } from '../../source/finding-list.ts'
import type { Source, Span } from '../../source/source.ts'
import { Lexer, Token } from './lexer.ts'
import { StatementReader } from './read-statements.ts'
import { readTable } from './read-timing.ts'
import { SignalNames, busBits, readName } from './signal-names.ts'
import type { Statement } from './statement.ts'
import { BrokenStatement, type StilFindings } from './stil-findings.ts'
import {
  emptyStilFile,
  type DeclaredCell,
  type Direction,
  type Place,
  type Procedure,
  type StilFile,
} from './stil-file.ts'

const EXCLAMATION = 33
const SEMICOLON = 59
const EQUALS = 61
const OPEN = 123
const CLOSE = 125

const MAX_INCLUDES = 16

/** Blocks that say nothing about values or time. */
const SILENT = new Set([
  'Header',
  'Ann',
  'UserKeywords',
  'UserFunctions',
  'Selector',
  'Environment',
  'NameMaps',
  'Pragma',
])

const DIRECTIONS: ReadonlySet<string> = new Set<Direction>(['In', 'Out', 'InOut', 'Supply', 'Pseudo'])

/** Gives the text of a file that another one includes, or null where there is none. */
export type Include = (name: string) => Source | null

/**
 * Reads all blocks of a STIL file but the patterns' statements (IEEE 1450-1999, clauses 8 to 20 and 24), going on after an error
 * at the next statement. Patterns are only found: `patterns` holds where their statements stand.
 */
export function readBlocks(source: Source, include: Include, findings: StilFindings): StilFile {
  const file = emptyStilFile()
  new BlockReader(file, source, include, findings, 0).read()
  return file
}

class BlockReader {
  private readonly file: StilFile
  private readonly source: Source
  private readonly include: Include
  private readonly findings: StilFindings
  private readonly depth: number
  private readonly lexer: Lexer
  private readonly names: SignalNames
  private readonly userKeywords = new Set<string>()

  constructor(file: StilFile, source: Source, include: Include, findings: StilFindings, depth: number) {
    this.file = file
    this.source = source
    this.include = include
    this.findings = findings
    this.depth = depth
    this.lexer = new Lexer(source, findings)
    this.names = new SignalNames(file, findings)
  }

  read(): void {
    const { lexer } = this
    this.attempt(() => {
      lexer.next()
      if (lexer.is('STIL')) {
        lexer.next()
        if (lexer.isKind(Token.Word)) lexer.next()
        if (lexer.isKind(OPEN)) lexer.skipBraces()
        lexer.next()
      } else if (this.depth === 0) this.noStil()
    })
    while (!lexer.isKind(Token.End)) {
      this.attempt(() => {
        if (lexer.isKind(SEMICOLON) || lexer.isKind(Token.Annotation)) lexer.next()
        else this.block()
      })
    }
  }

  private noStil(): never {
    const { lexer } = this
    if (lexer.isKind(Token.End)) {
      this.findings.fail(
        'empty-file',
        this.source,
        { start: 0, end: 0 },
        'the file has no statement',
        'Expected STIL 1.0; and the blocks of a STIL file.',
      )
    }
    const found = lexer.text.slice(lexer.start, Math.min(lexer.end, lexer.start + 60))
    this.findings.fail(
      'wrong-file-type',
      this.source,
      lexer.span,
      `expected the statement STIL 1.0; at the start of the file, found "${found}"`,
      'Is this a STIL file (IEEE 1450)?',
    )
  }

  /** Runs one statement's reader; after an error goes on where the next statement starts. */
  private attempt(read: () => void): void {
    const from = this.lexer.start
    try {
      read()
    } catch (reason) {
      if (!(reason instanceof BrokenStatement)) throw reason
      if (!this.lexer.skipStatement(from, false)) this.lexer.kind = Token.End
    }
  }

  private block(): void {
    const { lexer } = this
    if (!lexer.isKind(Token.Word)) lexer.unexpected('a block such as Signals, Timing or Pattern')
    const word = lexer.value
    const span = lexer.span
    lexer.next()
    switch (word) {
      case 'Signals':
        return this.body(() => this.signal())
      case 'SignalGroups': {
        const domain = this.optionalName()
        return this.body(() => this.group(domain))
      }
      case 'Timing':
        return this.timing()
      case 'Spec':
        this.optionalName()
        return this.body(() => this.spec())
      case 'ScanStructures':
        this.optionalName()
        return this.body(() => this.chain())
      case 'PatternBurst':
        return this.burst()
      case 'PatternExec':
        return this.exec(span)
      case 'Procedures':
        return this.procedures(this.file.procedures)
      case 'MacroDefs':
        return this.procedures(this.file.macros)
      case 'Pattern':
        return this.pattern()
      case 'Include':
        return this.includeFile()
      case 'UserKeywords':
        while (lexer.isKind(Token.Word) || lexer.isKind(Token.Quoted)) {
          this.userKeywords.add(lexer.value)
          lexer.next()
        }
        return this.skip()
      default:
        if (!SILENT.has(word) && !this.userKeywords.has(word)) {
          this.findings.caution(
            'ignored',
            this.source,
            span,
            word,
            `${quoted(word)} is no block of IEEE 1450-1999; it is passed over`,
          )
        }
        return this.skip()
    }
  }

  /** The statements between braces, each by `read`; an error costs one statement. */
  private body(read: () => void): void {
    const { lexer } = this
    lexer.expect(OPEN, '"{"')
    while (!lexer.isKind(CLOSE)) {
      if (lexer.isKind(Token.End)) lexer.unexpected('"}"')
      const from = lexer.start
      try {
        if (lexer.isKind(SEMICOLON) || lexer.isKind(Token.Annotation)) lexer.next()
        else read()
      } catch (reason) {
        if (!(reason instanceof BrokenStatement) || !lexer.skipStatement(from, true)) throw reason
      }
    }
    lexer.next()
  }

  private signal(): void {
    const { lexer } = this
    const start = lexer.start
    const name = readName(lexer, 'the name of a signal')
    const place = { source: this.source, span: { start, end: lexer.lastEnd } }
    if (!lexer.isKind(Token.Word) || !DIRECTIONS.has(lexer.value)) {
      lexer.unexpected('In, Out, InOut, Supply or Pseudo')
    }
    const direction = lexer.value as Direction
    lexer.next()
    const attributes = this.attributes()
    const bits = busBits(name)
    for (const bit of bits ?? [name]) this.addSignal(bit, direction, attributes, place)
    if (bits !== null) {
      const stem = name.slice(0, name.indexOf('['))
      this.addGroup(stem, '', place, { ...attributes, scan: 0 }, bits)
    }
  }

  private addSignal(
    name: string,
    direction: Direction,
    attributes: { scan: number; initial: string },
    place: Place,
  ): void {
    const { signals } = this.file
    if (signals.index.has(name)) {
      this.findings.fail(
        'duplicate-declaration',
        place.source,
        place.span,
        `signal ${quoted(name)} is declared again; expected each signal once`,
      )
    }
    signals.index.set(name, signals.names.length)
    signals.names.push(name)
    signals.direction.push(direction)
    signals.scan.push(attributes.scan)
    signals.initial.push(attributes.initial)
  }

  /** What stands between a signal's or group's braces, or ";" where it has none. */
  private attributes(): { scan: number; initial: string; base: string } {
    const { lexer } = this
    const found = { scan: 0, initial: '', base: '' }
    if (!lexer.isKind(OPEN)) {
      lexer.expect(SEMICOLON, '";" or "{"')
      return found
    }
    this.body(() => {
      if (!lexer.isKind(Token.Word)) lexer.unexpected('an attribute')
      const word = lexer.value
      lexer.next()
      if (word === 'ScanIn') found.scan = 1
      else if (word === 'ScanOut') found.scan = 2
      else if (word === 'DefaultState') {
        const state = lexer.isKind(Token.Word) ? lexer.value : ''
        found.initial = state.replace(/^Force/, '').charAt(0)
      } else if (word === 'Base') {
        lexer.next()
        if (lexer.isKind(Token.Word)) found.base = lexer.value
      }
      this.skip()
    })
    return found
  }

  private group(domain: string): void {
    const { lexer } = this
    const start = lexer.start
    const name = readName(lexer, 'the name of a group')
    const place = { source: this.source, span: { start, end: lexer.lastEnd } }
    lexer.expect(EQUALS, '"="')
    if (lexer.isKind(Token.Quoted)) {
      lexer.unexpected(
        'an expression of signals in apostrophes',
        `Write '${lexer.value.slice(0, 40).trim()}${lexer.value.length > 40 ? ' …' : ''}' with apostrophes instead of quotation marks.`,
      )
    }
    const expression = { source: this.source, span: lexer.span }
    if (lexer.isKind(Token.Word)) readName(lexer, 'a signal')
    else lexer.expect(Token.Expression, 'an expression of signals in apostrophes')
    const attributes = this.attributes()
    this.addGroup(name, domain, place, attributes, null, expression)
  }

  private addGroup(
    name: string,
    domain: string,
    place: Place,
    attributes: { scan: number; base: string },
    bits: readonly string[] | null,
    expression: Place = place,
  ): void {
    const groups = this.file.groups.get(domain) ?? new Map<string, never>()
    this.file.groups.set(domain, groups)
    if (groups.has(name)) {
      this.findings.caution(
        'duplicate-declaration',
        place.source,
        place.span,
        name,
        `group ${quoted(name)} is declared again; the last declaration holds`,
      )
    }
    const members =
      bits === null ? null : Int32Array.from(bits, (bit) => this.file.signals.index.get(bit) ?? 0)
    const { base, scan } = attributes
    groups.set(name, { name, expression, domain, base, scan, members, resolving: false })
  }

  private timing(): void {
    const { lexer } = this
    const name = this.optionalName()
    let domain = ''
    const tables = new Map(this.file.timings.get(name)?.tables)
    this.body(() => {
      if (lexer.is('SignalGroups')) {
        lexer.next()
        domain = readName(lexer, 'the name of a domain')
        return this.endStatement()
      }
      if (!lexer.is('WaveformTable')) {
        if (!lexer.isKind(Token.Word)) lexer.unexpected('WaveformTable')
        return this.skip()
      }
      lexer.next()
      const table = readTable(lexer, this.findings)
      tables.set(table.name, table)
    })
    this.file.timings.set(name, { domain, tables })
  }

  private spec(): void {
    const { lexer } = this
    const isVariable = lexer.is('Variable')
    if (!lexer.is('Category') && !isVariable) return this.skip()
    lexer.next()
    const outer = readName(lexer, isVariable ? 'the name of a variable' : 'the name of a category')
    this.body(() => {
      const inner = readName(lexer, 'a name')
      const variable = isVariable ? outer : inner
      let value = ''
      if (lexer.isKind(OPEN)) {
        this.body(() => {
          const isTypical = lexer.is('Typ')
          lexer.next()
          if (lexer.isKind(Token.Expression) && (isTypical || value === '')) value = lexer.value
          this.skip()
        })
      } else {
        if (lexer.isKind(EQUALS)) lexer.next()
        if (lexer.isKind(Token.Expression)) value = lexer.value
        this.skip()
      }
      if (!this.file.specs.has(variable)) this.file.specs.set(variable, value)
    })
  }

  private chain(): void {
    const { lexer } = this
    if (!lexer.is('ScanChain')) {
      if (!lexer.isKind(Token.Word)) lexer.unexpected('ScanChain')
      return this.skip()
    }
    lexer.next()
    const place = { source: this.source, span: lexer.span }
    const name = readName(lexer, 'the name of a scan chain')
    const found = {
      length: null as number | null,
      scanIn: '',
      scanOut: '',
      inversion: null as boolean | null,
    }
    const cells: DeclaredCell[] = []
    this.body(() => {
      if (!lexer.isKind(Token.Word)) lexer.unexpected('ScanLength, ScanIn, ScanOut or ScanCells')
      const word = lexer.value
      lexer.next()
      if (word === 'ScanLength') found.length = this.number()
      else if (word === 'ScanIn') found.scanIn = readName(lexer, 'the name of a signal')
      else if (word === 'ScanOut') found.scanOut = readName(lexer, 'the name of a signal')
      else if (word === 'ScanInversion') found.inversion = this.number() % 2 === 1
      else if (word === 'ScanCells') this.cells(cells)
      else return this.skip()
      this.endStatement()
    })
    this.file.chains.push({ name, place, ...found, cells })
  }

  /** Cell names in shift order; "!" between two is an inversion, and a range in brackets stands for its cells. */
  private cells(cells: DeclaredCell[]): void {
    const { lexer } = this
    let invertedBefore = false
    while (!lexer.isKind(SEMICOLON)) {
      if (lexer.isKind(EXCLAMATION)) {
        invertedBefore = !invertedBefore
        lexer.next()
        continue
      }
      const name = readName(lexer, 'the name of a scan cell, "!" or ";"')
      for (const cell of busBits(name) ?? [name]) {
        cells.push({ name: cell, invertedBefore })
        invertedBefore = false
      }
    }
    if (invertedBefore) cells.push({ name: '', invertedBefore })
  }

  private burst(): void {
    const { lexer } = this
    const place = { source: this.source, span: lexer.span }
    const name = readName(lexer, 'the name of the burst')
    const entries: { name: string; place: Place }[] = []
    const domains = { groups: '', procedures: '', macros: '' }
    this.body(() => {
      if (!lexer.isKind(Token.Word)) lexer.unexpected('PatList')
      const word = lexer.value
      const { span } = lexer
      lexer.next()
      if (word === 'SignalGroups') domains.groups = readName(lexer, 'the name of a domain')
      else if (word === 'Procedures') domains.procedures = readName(lexer, 'the name of a domain')
      else if (word === 'MacroDefs') domains.macros = readName(lexer, 'the name of a domain')
      else if (word === 'PatList') {
        return this.body(() => {
          const entry = { source: this.source, span: lexer.span }
          entries.push({ name: readName(lexer, 'the name of a pattern or burst'), place: entry })
          if (lexer.isKind(OPEN)) {
            lexer.skipBraces()
            lexer.next()
          } else if (!lexer.isKind(SEMICOLON) && !lexer.isKind(CLOSE)) lexer.unexpected('";" or "{"')
        })
      } else if (word.endsWith('PatList')) {
        this.findings.fail(
          'unsupported-construct',
          this.source,
          span,
          `${word} runs patterns side by side, and is not supported; expected PatList`,
        )
      }
      this.skip()
    })
    this.file.bursts.set(name, { name, place, entries, domains })
  }

  private exec(span: Span): void {
    const { lexer } = this
    const name = this.optionalName()
    let timing = ''
    let burst: { name: string; place: Place } | null = null
    this.body(() => {
      if (!lexer.isKind(Token.Word)) lexer.unexpected('Timing or PatternBurst')
      const word = lexer.value
      lexer.next()
      const place = { source: this.source, span: lexer.span }
      if (word === 'Timing') timing = readName(lexer, 'the name of a Timing block')
      else if (word === 'PatternBurst') burst = { name: readName(lexer, 'the name of a burst'), place }
      this.skip()
    })
    this.file.execs.push({ name, place: { source: this.source, span }, timing, burst })
  }

  private procedures(into: Map<string, Map<string, Procedure>>): void {
    const { lexer } = this
    const domain = this.optionalName()
    const statements = new StatementReader(lexer, this.names, this.findings)
    const found = into.get(domain) ?? new Map<string, Procedure>()
    into.set(domain, found)
    this.body(() => {
      const place = { source: this.source, span: lexer.span }
      const name = readName(lexer, 'the name of a procedure or macro')
      const body = statements.block(0)
      found.set(name, { name, place, body, hasShift: hasShift(body) })
    })
  }

  private pattern(): void {
    const { lexer } = this
    const { span } = lexer
    const name = readName(lexer, 'the name of the pattern')
    if (!lexer.isKind(OPEN)) lexer.unexpected('"{"')
    const start = lexer.end
    const end = lexer.skipBraces()
    lexer.next()
    if (this.file.patterns.has(name)) {
      this.findings.fail(
        'duplicate-declaration',
        this.source,
        span,
        `pattern ${quoted(name)} is declared again; expected each pattern once`,
      )
    }
    this.file.patterns.set(name, { name, source: this.source, start, end })
  }

  private includeFile(): void {
    const { lexer } = this
    const { span } = lexer
    const name = readName(lexer, 'the name of a file')
    this.skip()
    if (this.depth >= MAX_INCLUDES) {
      this.findings.fail('limit', this.source, span, `files included more than ${MAX_INCLUDES} deep`)
    }
    const source = this.include(name)
    if (source === null) {
      this.findings.fail(
        'unknown-name',
        this.source,
        span,
        `the included file ${quoted(name)} is not there`,
        'Give the reader this file too, or put its text in place of the Include.',
      )
    }
    new BlockReader(this.file, source, this.include, this.findings, this.depth + 1).read()
  }

  /** A name before "{", or '' where the block has none. */
  private optionalName(): string {
    return this.lexer.isKind(OPEN) ? '' : readName(this.lexer, 'a name or "{"')
  }

  private number(): number {
    const { lexer } = this
    const text = lexer.isKind(Token.Word) || lexer.isKind(Token.Expression) ? lexer.value.trim() : ''
    if (!/^\d{1,9}$/.test(text)) lexer.unexpected('a number')
    lexer.next()
    return Number(text)
  }

  private endStatement(): void {
    this.lexer.expect(SEMICOLON, '";"')
  }

  /** Past what is left of a statement: its ";", or its block; stops before the "}" of the block around it. */
  private skip(): void {
    const { lexer } = this
    while (!lexer.isKind(SEMICOLON) && !lexer.isKind(CLOSE) && !lexer.isKind(Token.End)) {
      if (lexer.isKind(OPEN)) {
        lexer.skipBraces()
        lexer.next()
        return
      }
      lexer.next()
    }
    if (lexer.isKind(SEMICOLON)) lexer.next()
  }
}

function hasShift(body: readonly Statement[]): boolean {
  return body.some(
    (statement) =>
      statement.kind === 'shift' ||
      ((statement.kind === 'loop' || statement.kind === 'match-loop') && hasShift(statement.body)),
  )
}
