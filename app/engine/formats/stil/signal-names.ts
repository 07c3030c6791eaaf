import { closestName } from '../../source/closest-name.ts'
import { quoted } from '../../source/finding-list.ts'
import { Lexer, Token } from './lexer.ts'
import type { StilFindings } from './stil-findings.ts'
import type { Place, SignalGroup, StilFile } from './stil-file.ts'

const PLUS = 43
const MINUS = 45
const COLON = 58
const OPEN_BRACKET = 91
const OPEN_PARENTHESIS = 40
const CLOSE_PARENTHESIS = 41

/** The widest group and the deepest nesting that are read: past them a file is broken or hostile. */
const MAX_WIDTH = 1 << 20
const MAX_DEPTH = 64

/**
 * Finds the signals that a name or an expression stands for (IEEE 1450-1999, clauses 6.14 and 15), each once worked out:
 *
 *     expression = term { ("+" | "-") term }
 *     term       = name | "(" expression ")"
 *     name       = signal | group | domain "::" group | signal "[" first ".." last "]"
 */
export class SignalNames {
  private readonly file: StilFile
  private readonly findings: StilFindings
  private readonly found = new Map<string, Int32Array>()
  /** The domain whose groups hide those without one. */
  private domain = ''

  constructor(file: StilFile, findings: StilFindings) {
    this.file = file
    this.findings = findings
  }

  useDomain(domain: string): void {
    if (domain === this.domain) return
    this.domain = domain
    this.found.clear()
  }

  /** Signals of a reference as statements hold it: a name, or an expression in its apostrophes. */
  find(reference: string, place: Place): Int32Array {
    const known = this.found.get(reference)
    if (known !== undefined) return known
    const members = reference.startsWith("'") ? this.expression(place, 0) : this.named(reference, place, 0)
    this.found.set(reference, members)
    return members
  }

  group(name: string): SignalGroup | null {
    const inDomain = this.file.groups.get(this.domain)?.get(name) ?? this.file.groups.get('')?.get(name)
    if (inDomain !== undefined) return inDomain
    for (const groups of this.file.groups.values()) {
      const elsewhere = groups.get(name)
      if (elsewhere !== undefined) return elsewhere
    }
    return null
  }

  membersOf(group: SignalGroup): Int32Array {
    return this.groupMembers(group, 0)
  }

  private groupMembers(group: SignalGroup, depth: number): Int32Array {
    if (group.members !== null) return group.members
    const { expression } = group
    if (group.resolving) {
      this.findings.fail(
        'syntax',
        expression.source,
        expression.span,
        `group ${quoted(group.name)} contains itself`,
      )
    }
    group.resolving = true
    try {
      group.members = this.expression(expression, depth + 1)
    } finally {
      group.resolving = false
    }
    return group.members
  }

  private expression(place: Place, depth: number): Int32Array {
    const { source, span } = place
    if (depth > MAX_DEPTH) {
      this.findings.fail('limit', source, span, `groups nested deeper than ${MAX_DEPTH}`)
    }
    const inApostrophes = source.text.charCodeAt(span.start) === 39
    const inner = inApostrophes ? 1 : 0
    const lexer = new Lexer(source, this.findings, span.start + inner, span.end - inner)
    lexer.next()
    const members = this.sum(lexer, depth)
    if (!lexer.isKind(Token.End)) lexer.unexpected('"+", "-" or the end of the expression')
    return Int32Array.from(members)
  }

  private sum(lexer: Lexer, depth: number): number[] {
    let members = this.term(lexer, depth)
    for (;;) {
      if (!lexer.isKind(PLUS) && !lexer.isKind(MINUS)) return members
      const subtract = lexer.isKind(MINUS)
      const span = lexer.span
      lexer.next()
      const more = this.term(lexer, depth)
      if (subtract) {
        const gone = new Set(more)
        members = members.filter((signal) => !gone.has(signal))
      } else {
        if (members.length + more.length > MAX_WIDTH) {
          this.findings.fail('limit', lexer.source, span, `a group of more than ${MAX_WIDTH} signals`)
        }
        for (const signal of more) members.push(signal)
      }
    }
  }

  private term(lexer: Lexer, depth: number): number[] {
    if (lexer.isKind(OPEN_PARENTHESIS)) {
      if (depth > MAX_DEPTH) {
        this.findings.fail('limit', lexer.source, lexer.span, `parentheses nested deeper than ${MAX_DEPTH}`)
      }
      lexer.next()
      const members = this.sum(lexer, depth + 1)
      lexer.expect(CLOSE_PARENTHESIS, '")"')
      return members
    }
    const start = lexer.start
    const name = readName(lexer, 'a signal or group')
    const place = { source: lexer.source, span: { start, end: lexer.lastEnd } }
    return Array.from(this.named(name, place, depth))
  }

  private named(name: string, place: Place, depth: number): Int32Array {
    const group = this.groupOf(name)
    if (group !== null) return this.groupMembers(group, depth)
    const { index } = this.file.signals
    const signal = index.get(name)
    if (signal !== undefined) return Int32Array.of(signal)
    const bits = busBits(name)
    if (bits !== null) {
      const members = bits.map((bit) => index.get(bit))
      if (members.every((member) => member !== undefined)) return Int32Array.from(members)
    }
    const candidates = [...index.keys(), ...(this.file.groups.get('')?.keys() ?? [])]
    const closest = candidates.length <= 20_000 ? closestName(name, candidates) : null
    this.findings.fail(
      'unknown-signal',
      place.source,
      place.span,
      `${quoted(name)} is neither a signal nor a group`,
      closest === null ? 'Declare it under Signals or SignalGroups.' : `Did you mean "${closest}"?`,
    )
  }

  private groupOf(name: string): SignalGroup | null {
    const at = name.indexOf('::')
    return at < 0
      ? this.group(name)
      : (this.file.groups.get(name.slice(0, at))?.get(name.slice(at + 2)) ?? null)
  }
}

/**
 * Takes a name, with a bus range or index that belongs to it and parts joined by "." or "::"; quoted or not, the result
 * has no quotes.
 */
export function readName(lexer: Lexer, what: string): string {
  if (!lexer.isKind(Token.Word) && !lexer.isKind(Token.Quoted)) lexer.unexpected(what)
  let name = lexer.value
  let end = lexer.end
  lexer.next()
  while (lexer.start === end) {
    if (lexer.isKind(OPEN_BRACKET)) {
      lexer.next()
      if (!lexer.isKind(Token.Word)) lexer.unexpected('a bit number or a range such as 0..7')
      name += `[${lexer.value}]`
      lexer.next()
      end = lexer.end
      lexer.expect(93, '"]"')
    } else if (lexer.isKind(COLON) && lexer.text.charCodeAt(lexer.end) === COLON) {
      lexer.next()
      lexer.next()
      if (!lexer.isKind(Token.Word) && !lexer.isKind(Token.Quoted)) lexer.unexpected('a name after "::"')
      name += `::${lexer.value}`
      end = lexer.end
      lexer.next()
    } else if (lexer.isKind(Token.Quoted) || (lexer.isKind(Token.Word) && name.endsWith('.'))) {
      name += lexer.value
      end = lexer.end
      lexer.next()
    } else if (lexer.isKind(Token.Word) && lexer.value === '.') {
      name += '.'
      end = lexer.end
      lexer.next()
    } else break
  }
  return name
}

/** The names of a bus's bits, `d[2..0]` → d[2], d[1], d[0]; null where the name is no range of at most a million bits. */
export function busBits(name: string): string[] | null {
  const match = /^(.*)\[(\d{1,9})\.\.(\d{1,9})\]$/s.exec(name)
  if (match === null) return null
  const [, stem = '', from = '', to = ''] = match
  const first = Number(from)
  const last = Number(to)
  const width = Math.abs(last - first) + 1
  if (width > MAX_WIDTH) return null
  const step = last < first ? -1 : 1
  return Array.from({ length: width }, (_, at) => `${stem}[${first + step * at}]`)
}
