import { quoted, type FindingList } from '../../source/finding-list.ts'
import type { ReadingProgress } from '../../source/reading-progress.ts'
import type { Source } from '../../source/source.ts'

/** A value as it was written: its text without quotes and continuation lines, and the offset of its first character. */
export type LibertyValue = { readonly text: string; readonly place: number }

export type LibertyAttribute = {
  readonly name: string
  readonly place: number
  readonly values: readonly LibertyValue[]
}

export type LibertyGroup = LibertyAttribute & {
  readonly attributes: readonly LibertyAttribute[]
  readonly groups: readonly LibertyGroup[]
}

const MAX_DEPTH = 64
const MAX_WORD = 65_536
const PROGRESS_STEP = 4_000_000

/** Groups that say nothing about function; they are checked for syntax and not kept. */
const KEPT_GROUPS: ReadonlySet<string> = new Set([
  'library', 'cell', 'model', 'pin', 'bus', 'bundle', 'ff', 'latch', 'ff_bank', 'latch_bank', 'statetable', 'test_cell',
  'pg_pin', 'type', 'scaled_cell',
]) // prettier-ignore

const QUOTE = 34
const OPEN = 40
const CLOSE = 41
const STAR = 42
const COMMA = 44
const SLASH = 47
const COLON = 58
const SEMICOLON = 59
const EQUALS = 61
const BACKSLASH = 92
const OPEN_BRACE = 123
const CLOSE_BRACE = 125

/** Thrown to give up one statement; the finding is recorded. */
class StatementError extends Error {}

/**
 * Parses Liberty's syntax into groups and attributes:
 *
 *     group     = name "(" [ value { [ "," ] value } ] ")" "{" { statement } "}" [ ";" ]
 *     statement = group | name ":" value [ ";" ] | name "(" values ")" [ ";" ] | name "=" value [ ";" ]
 *     value     = "…" | word | expression to the end of the statement
 *     comment   = block or line comment; a backslash at the end of a line continues it
 *
 * After an error reading goes on with the next statement. Returns the library groups; inside them
 * what KEPT_GROUPS does not name is left out. Null where the caller cancelled.
 */
export function parseLiberty(
  source: Source,
  findings: FindingList,
  onProgress?: ReadingProgress,
): readonly LibertyGroup[] | null {
  return new LibertyParser(source, findings, onProgress).parse()
}

type OpenGroup = { attributes: LibertyAttribute[]; groups: LibertyGroup[] }

class LibertyParser {
  private readonly source: Source
  private readonly text: string
  private readonly findings: FindingList
  private readonly onProgress: ReadingProgress | undefined
  private at = 0
  private nextProgress = PROGRESS_STEP
  private isCancelled = false

  constructor(source: Source, findings: FindingList, onProgress: ReadingProgress | undefined) {
    this.source = source
    this.text = source.text
    this.findings = findings
    this.onProgress = onProgress
    if (this.text.charCodeAt(0) === 0xfeff) this.at = 1
  }

  parse(): readonly LibertyGroup[] | null {
    const file: OpenGroup = { attributes: [], groups: [] }
    while (!this.findings.isFull && !this.isCancelled) {
      const start = this.at
      try {
        if (!this.skipToLibrary()) break
        this.parseStatement(file, 0, true)
      } catch (error) {
        if (!(error instanceof StatementError)) throw error
        this.recover(start)
      }
    }
    return this.isCancelled ? null : file.groups
  }

  /** Moves to the next `library (`; text before it is no Liberty and is warned about. False at the end. */
  private skipToLibrary(): boolean {
    const start = this.skipBlank() === -1 ? -1 : this.at
    for (let code = this.skipBlank(); code !== -1; code = this.skipBlank()) {
      const place = this.at
      if (this.readWord() === 'library' && this.skipBlank() === OPEN) {
        if (place > start) this.warnStray(start, place)
        this.at = place
        return true
      }
      if (this.at === place) this.at++
    }
    if (start >= 0) this.warnStray(start, this.text.length)
    return false
  }

  private warnStray(start: number, end: number): void {
    const found = this.text.slice(start, end).trimEnd()
    this.findings.warn(
      'ignored',
      this.source,
      start,
      start + found.length,
      `text outside the library group is passed over: ${quoted(found.replaceAll(/\s+/g, ' '))}`,
      { hint: 'Put it into a comment.' },
    )
  }

  /** Statements up to the closing brace of their group. */
  private parseStatements(into: OpenGroup, depth: number, isKept: boolean): void {
    for (;;) {
      if (this.findings.isFull || !this.reportProgress()) return
      const code = this.skipBlank()
      if (code === -1) return
      if (code === CLOSE_BRACE) return
      if (code === SEMICOLON) this.at++
      else {
        const start = this.at
        try {
          this.parseStatement(into, depth, isKept)
        } catch (error) {
          if (!(error instanceof StatementError)) throw error
          this.recover(start)
        }
      }
    }
  }

  private parseStatement(into: OpenGroup, depth: number, isKept: boolean): void {
    const place = this.at
    const name = this.readWord()
    if (name === '') this.failExpected('the name of an attribute or a group')
    const sign = this.skipBlank()
    if (sign === COLON || sign === EQUALS) {
      this.at++
      const value = this.readValue()
      if (isKept && sign === COLON) into.attributes.push({ name, place, values: [value] })
      return
    }
    if (sign !== OPEN) this.failExpected(`":" or "(" after ${quoted(name)}`)
    this.at++
    const values = this.readArguments()
    if (this.skipBlank() !== OPEN_BRACE) {
      if (name === 'include_file') this.refuseInclude(place)
      if (isKept) into.attributes.push({ name, place, values })
      return
    }
    const open = this.at++
    if (depth === MAX_DEPTH) {
      this.error('limit', place, open, `groups nested deeper than ${MAX_DEPTH}`)
      this.skipGroup()
      return
    }
    const group: OpenGroup = { attributes: [], groups: [] }
    const keepsGroup = isKept && KEPT_GROUPS.has(name)
    this.parseStatements(group, depth + 1, keepsGroup)
    if (this.isCancelled || this.findings.isFull) return
    if (this.skipBlank() === CLOSE_BRACE) this.at++
    else {
      this.error('truncated', place, open + 1, `group ${quoted(name)} has no closing "}"`, CUT_OFF)
    }
    if (keepsGroup) into.groups.push({ name, place, values, ...group })
  }

  private refuseInclude(place: number): void {
    this.error(
      'unsupported-construct',
      place,
      this.at,
      'an include_file: files are read as they are given, none is looked for',
      'Put the text of the included file in its place.',
    )
  }

  /** A quoted value, or everything up to ";" or the end of the line. */
  private readValue(): LibertyValue {
    if (this.skipBlank() === QUOTE) {
      const value = this.readString()
      return value
    }
    const { text } = this
    const place = this.at
    let result = ''
    let from = place
    while (this.at < text.length) {
      const code = text.charCodeAt(this.at)
      if (code === SEMICOLON || code === CLOSE_BRACE || code === OPEN_BRACE || code === 10 || code === 13)
        break
      if (code === SLASH && (text.charCodeAt(this.at + 1) === SLASH || text.charCodeAt(this.at + 1) === STAR))
        break
      if (code === BACKSLASH) {
        const end = this.endOfContinuation(this.at)
        if (end > 0) {
          result += text.slice(from, this.at)
          this.at = from = end
          continue
        }
      }
      this.at++
    }
    result = (result + text.slice(from, this.at)).trimEnd()
    if (result === '') this.failExpected('a value')
    return { text: result, place }
  }

  private readString(): LibertyValue {
    const { text } = this
    const quote = this.at
    let from = quote + 1
    let result = ''
    this.at = from
    while (this.at < text.length) {
      const code = text.charCodeAt(this.at)
      if (code === QUOTE) {
        result += text.slice(from, this.at++)
        return { text: result, place: quote + 1 }
      }
      if (code === BACKSLASH) {
        const end = this.endOfContinuation(this.at)
        if (end > 0) {
          result += text.slice(from, this.at)
          this.at = from = end
          continue
        }
        this.at++
      }
      this.at++
    }
    this.at = text.length
    this.error('truncated', quote, quote + 1, 'this quote is never closed', 'Close the string.')
    throw new StatementError()
  }

  /** Where the text goes on after a backslash that ends its line, or 0. */
  private endOfContinuation(backslash: number): number {
    const { text } = this
    let at = backslash + 1
    while (text.charCodeAt(at) === 32 || text.charCodeAt(at) === 9) at++
    if (text.charCodeAt(at) === 13 && text.charCodeAt(at + 1) === 10) return at + 2
    return text.charCodeAt(at) === 10 || text.charCodeAt(at) === 13 ? at + 1 : 0
  }

  /** Values up to ")", which separating commas may be missing between. */
  private readArguments(): LibertyValue[] {
    const values: LibertyValue[] = []
    for (;;) {
      const code = this.skipBlank()
      if (code === CLOSE) {
        this.at++
        return values
      }
      if (code === COMMA) this.at++
      else if (code === QUOTE) values.push(this.readString())
      else {
        const place = this.at
        const word = this.readWord()
        if (word === '') this.failExpected('a value, "," or ")"')
        values.push({ text: word, place })
      }
    }
  }

  private readWord(): string {
    const { text } = this
    const start = this.at
    while (this.at < text.length && isWordCode(text.charCodeAt(this.at))) this.at++
    if (this.at - start > MAX_WORD) {
      this.error(
        'limit',
        start,
        this.at,
        `a word of ${this.at - start} characters; at most ${MAX_WORD} are read`,
      )
      throw new StatementError()
    }
    return text.slice(start, this.at)
  }

  /** Moves to the next character that is no white space, comment or continuation; −1 at the end. */
  private skipBlank(): number {
    const { text } = this
    while (this.at < text.length) {
      const code = text.charCodeAt(this.at)
      if (code <= 32) this.at++
      else if (code === SLASH && text.charCodeAt(this.at + 1) === SLASH) this.at = this.endOfLine()
      else if (code === SLASH && text.charCodeAt(this.at + 1) === STAR) {
        const close = text.indexOf('*/', this.at + 2)
        if (close < 0) {
          this.error('truncated', this.at, this.at + 2, 'this comment has no closing "*/"', CUT_OFF)
          this.at = text.length
        } else this.at = close + 2
      } else if (code === BACKSLASH && this.endOfContinuation(this.at) > 0) {
        this.at = this.endOfContinuation(this.at)
      } else return code
    }
    return -1
  }

  private endOfLine(): number {
    let at = this.at
    while (at < this.text.length && this.text.charCodeAt(at) !== 10 && this.text.charCodeAt(at) !== 13) at++
    return at
  }

  /** Moves behind the broken statement: its ";", its line's end, or the whole of a group that it opens. */
  private recover(start: number): void {
    const { text } = this
    if (this.at === start) this.at++
    while (this.at < text.length) {
      const code = text.charCodeAt(this.at)
      if (code === CLOSE_BRACE) return
      this.at++
      if (code === SEMICOLON || code === 10) return
      if (code === OPEN_BRACE) {
        this.skipGroup()
        return
      }
    }
  }

  /** Moves behind the "}" of the group that has just been opened. */
  private skipGroup(): void {
    for (let depth = 1; depth > 0 && this.skipBlank() !== -1;) {
      const code = this.text.charCodeAt(this.at++)
      if (code === OPEN_BRACE) depth++
      else if (code === CLOSE_BRACE) depth--
      else if (code === QUOTE) {
        const close = this.text.indexOf('"', this.at)
        this.at = close < 0 ? this.text.length : close + 1
      }
    }
  }

  private reportProgress(): boolean {
    if (this.at >= this.nextProgress) {
      this.nextProgress = this.at + PROGRESS_STEP
      if (this.onProgress?.(this.at, this.text.length) === false) this.isCancelled = true
    }
    return !this.isCancelled
  }

  private error(
    code: 'syntax' | 'limit' | 'truncated' | 'unsupported-construct',
    start: number,
    end: number,
    message: string,
    hint?: string,
  ): void {
    this.findings.error(code, this.source, start, end, message, { hint: hint ?? null })
  }

  private failExpected(what: string): never {
    const isEnd = this.skipBlank() === -1
    const found = isEnd ? 'the end of the file' : quoted(this.text[this.at])
    this.error(
      isEnd ? 'truncated' : 'syntax',
      this.at,
      this.at + (isEnd ? 0 : 1),
      `expected ${what}, found ${found}`,
      isEnd ? CUT_OFF : undefined,
    )
    throw new StatementError()
  }
}

const CUT_OFF = 'The file may have been cut off; compare its size with the original.'

/** What an unquoted word may hold: all but white space, quotes, separators and brackets of the syntax. */
function isWordCode(code: number): boolean {
  return (
    code > 32 &&
    code !== QUOTE &&
    code !== OPEN &&
    code !== CLOSE &&
    code !== COMMA &&
    code !== COLON &&
    code !== SEMICOLON &&
    code !== EQUALS &&
    code !== BACKSLASH &&
    code !== OPEN_BRACE &&
    code !== CLOSE_BRACE
  )
}
