import { type Diagnostic, type Reading } from '../../source/diagnostic.ts'
import type { Source, Span } from '../../source/source.ts'

/** A JSON value that remembers where it stands in the text. */
export type JsonNode = { readonly span: Span } & (
  | { readonly kind: 'object'; readonly members: readonly JsonMember[] }
  | { readonly kind: 'list'; readonly items: readonly JsonNode[] }
  | { readonly kind: 'text'; readonly text: string }
  | { readonly kind: 'number'; readonly number: number }
  | { readonly kind: 'boolean'; readonly boolean: boolean }
  | { readonly kind: 'null' }
)

export type JsonMember = {
  readonly name: string
  readonly nameSpan: Span
  readonly value: JsonNode
}

const MAX_DEPTH = 64
const MAX_LENGTH = 1 << 24

/**
 * Reads JSON text into nodes that carry their places. The first error ends the reading, since JSON gives no safe place
 * to go on. Of members with one name the reading keeps all; who looks at the members decides.
 * Codes: 'empty-file', 'syntax', 'truncated', 'limit' (over 16 million characters, or nested deeper than 64).
 * SOURCE: ECMA-404, The JSON data interchange syntax. A byte order mark at the start is skipped.
 */
export function parseJson(source: Source): Reading<JsonNode> {
  const { text } = source
  let at = text.charCodeAt(0) === 0xfeff ? 1 : 0
  let depth = 0

  try {
    if (text.length > MAX_LENGTH) {
      throw found('limit', 0, 0, `the file has ${text.length} characters, more than ${MAX_LENGTH}`)
    }
    skipSpace()
    if (at === text.length) {
      throw found('empty-file', 0, 0, 'the file is empty; a JSON object is expected', 'Write at least {}')
    }
    const value = readValue('a JSON value')
    skipSpace()
    if (at < text.length) throw unexpected('the end of the file')
    return { value, diagnostics: [] }
  } catch (reason) {
    if (!(reason instanceof JsonFinding)) throw reason
    return { value: null, diagnostics: [reason.diagnostic] }
  }

  function found(
    code: Diagnostic['code'],
    start: number,
    end: number,
    message: string,
    hint?: string,
  ): JsonFinding {
    const span = { start, end: Math.min(end, text.length) }
    const diagnostic = { code, severity: 'error', file: source.name, span, message } as const
    return new JsonFinding(hint === undefined ? diagnostic : { ...diagnostic, hint })
  }

  function unexpected(expected: string): JsonFinding {
    if (at >= text.length) {
      const hint = 'The file may be cut off: look for a bracket or a quotation mark that is not closed'
      return found('truncated', at, at, `the file ends where ${expected} is expected`, hint)
    }
    const word = /^(?:[\w.+-]+|.)/su.exec(text.slice(at, at + 40))?.[0] ?? ''
    return found(
      'syntax',
      at,
      at + word.length,
      `found ${shown(word)} where ${expected} is expected`,
      hintFor(word),
    )
  }

  function hintFor(word: string): string | undefined {
    if (word === "'" || word === '\u201c' || word === '\u201d')
      return 'Texts and names stand in straight double quotation marks'
    if (word === '/' || word === '#') return 'JSON has no comments: remove it'
    if (word === '}' || word === ']') return 'Remove the comma before it, or add what is missing'
    if (/^[+.]?\d|^-\./.test(word))
      return 'Write numbers as 12, 0.5 or 1e6: no plus sign, no leading zero, a digit before the point'
    if (/^(?:nan|-?inf)/i.test(word)) return 'JSON has finite numbers only'
    if (/^[a-z_]/i.test(word)) return 'Put names and texts in double quotation marks'
    return undefined
  }

  function skipSpace(): void {
    for (;;) {
      const code = text.charCodeAt(at)
      if (code !== 32 && code !== 10 && code !== 13 && code !== 9) return
      at++
    }
  }

  function readValue(expected: string): JsonNode {
    const start = at
    const first = text[at]
    if (first === '{' || first === '[') {
      if (++depth > MAX_DEPTH)
        throw found('limit', at, at + 1, `brackets are nested deeper than ${MAX_DEPTH}`)
      const node = first === '{' ? readObject() : readList()
      depth--
      return node
    }
    if (first === '"') {
      const content = readText()
      return { kind: 'text', text: content, span: { start, end: at } }
    }
    const word = /^-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?(?![\w.+-])|^(?:true|false|null)(?!\w)/.exec(
      text.slice(at, at + 400),
    )?.[0]
    if (word === undefined) throw unexpected(expected)
    at += word.length
    const span = { start, end: at }
    if (word === 'null') return { kind: 'null', span }
    if (word === 'true' || word === 'false') return { kind: 'boolean', boolean: word === 'true', span }
    const number = Number(word)
    if (!Number.isFinite(number)) throw found('syntax', start, at, `the number ${shown(word)} is too large`)
    return { kind: 'number', number, span }
  }

  function readObject(): JsonNode {
    const start = at++
    const members: JsonMember[] = []
    skipSpace()
    if (text[at] === '}') return { kind: 'object', members, span: { start, end: ++at } }
    for (;;) {
      if (text[at] !== '"') throw unexpected('a name in double quotation marks')
      const nameStart = at
      const name = readText()
      const nameSpan = { start: nameStart, end: at }
      skipSpace()
      if (text[at] !== ':') throw unexpected(`a colon after "${name}"`)
      at++
      skipSpace()
      members.push({ name, nameSpan, value: readValue(`the value of "${name}"`) })
      skipSpace()
      if (text[at] === '}') return { kind: 'object', members, span: { start, end: ++at } }
      if (text[at] !== ',') throw unexpected('a comma or a closing }')
      at++
      skipSpace()
    }
  }

  function readList(): JsonNode {
    const start = at++
    const items: JsonNode[] = []
    skipSpace()
    if (text[at] === ']') return { kind: 'list', items, span: { start, end: ++at } }
    for (;;) {
      items.push(readValue('a value of the list'))
      skipSpace()
      if (text[at] === ']') return { kind: 'list', items, span: { start, end: ++at } }
      if (text[at] !== ',') throw unexpected('a comma or a closing ]')
      at++
      skipSpace()
    }
  }

  function readText(): string {
    const start = at++
    let content = ''
    for (;;) {
      const code = text.charCodeAt(at)
      if (Number.isNaN(code) || code === 10 || code === 13) {
        throw found(
          'truncated',
          start,
          at,
          'the quotation mark is not closed on its line',
          'Add the closing "',
        )
      }
      if (code < 32) {
        throw found(
          'syntax',
          at,
          at + 1,
          `found ${shown(text[at])} inside a text`,
          'Write it as an escape such as \\t',
        )
      }
      if (code === 34) {
        at++
        return content
      }
      content += code === 92 ? readEscape() : text[at++]
    }
  }

  function readEscape(): string {
    const escape = /^\\(?:["\\/bfnrt]|u[0-9a-fA-F]{4})/.exec(text.slice(at, at + 6))?.[0]
    if (escape === undefined) {
      throw found(
        'syntax',
        at,
        at + 2,
        `found ${shown(text.slice(at, at + 2))}, which is no escape`,
        'A backslash is written \\\\',
      )
    }
    at += escape.length
    if (escape[1] === 'u') return String.fromCharCode(Number.parseInt(escape.slice(2), 16))
    return ESCAPES[escape[1]] ?? escape[1]
  }
}

const ESCAPES: Record<string, string> = { b: '\b', f: '\f', n: '\n', r: '\r', t: '\t' }

class JsonFinding extends Error {
  readonly diagnostic: Diagnostic
  constructor(diagnostic: Diagnostic) {
    super(diagnostic.message)
    this.diagnostic = diagnostic
  }
}

function shown(text: string): string {
  return /^[\x20-\x7e\u00a0-\uffff]+$/u.test(text)
    ? `\`${text}\``
    : `the character U+${(text.codePointAt(0) ?? 0).toString(16).toUpperCase().padStart(4, '0')}`
}
