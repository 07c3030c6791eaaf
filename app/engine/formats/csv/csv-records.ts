/** One field of a record: its text without quotes, and where it stands with them. */
export type CsvField = { readonly text: string; readonly start: number; readonly end: number }

export type CsvRecord = {
  readonly fields: readonly CsvField[]
  /** Where a quotation mark opens that is never closed; −1 where all are. */
  readonly unclosedAt: number
}

const QUOTE = 34
const NEWLINE = 10
const RETURN = 13

/**
 * Yields the records of a CSV text one by one (RFC 4180): fields between separators, quoted where they hold a separator,
 * a line end or a doubled quotation mark. White space around a field is not part of it; empty lines and lines that
 * start with `#` are passed over, and so is a byte order mark.
 */
export function* csvRecords(text: string, separator: string): Generator<CsvRecord, void, undefined> {
  const sign = separator.charCodeAt(0)
  let at = text.charCodeAt(0) === 0xfeff ? 1 : 0
  while (at < text.length) {
    const first = text.charCodeAt(at)
    if (first === NEWLINE || first === RETURN) {
      at++
      continue
    }
    if (text[at] === '#') {
      at = lineEnd(text, at)
      continue
    }
    const fields: CsvField[] = []
    let unclosedAt = -1
    for (;;) {
      const field = readField(text, at, sign)
      fields.push(field.field)
      if (field.unclosed) unclosedAt = field.field.start
      at = field.next
      if (at >= text.length || text.charCodeAt(at) !== sign) break
      at++
    }
    if (fields.length > 1 || fields[0].text !== '') yield { fields, unclosedAt }
  }
}

/** Returns the separator of a CSV text: of comma, semicolon and tab the one that its first line has most of. */
export function csvSeparator(text: string): ',' | ';' | '\t' {
  const start = text.search(/^[^#\r\n]/m)
  const header = start < 0 ? '' : text.slice(start, lineEnd(text, start))
  const count = (sign: string): number => header.split(sign).length
  const [comma, semicolon, tab] = [count(','), count(';'), count('\t')]
  if (semicolon > comma && semicolon >= tab) return ';'
  return tab > comma ? '\t' : ','
}

function readField(
  text: string,
  from: number,
  separator: number,
): { field: CsvField; next: number; unclosed: boolean } {
  let at = from
  while (isSpace(text.charCodeAt(at), separator)) at++
  if (text.charCodeAt(at) === QUOTE) {
    const start = at
    let close = text.indexOf('"', at + 1)
    while (close >= 0 && text.charCodeAt(close + 1) === QUOTE) close = text.indexOf('"', close + 2)
    const unclosed = close < 0
    const end = unclosed ? text.length : close + 1
    const inner = text.slice(start + 1, unclosed ? end : close).replaceAll('""', '"')
    const next = fieldEnd(text, end, separator)
    const rest = text.slice(end, next).trim()
    return { field: { text: inner + rest, start, end: rest === '' ? end : next }, next, unclosed }
  }
  const next = fieldEnd(text, at, separator)
  const value = text.slice(at, next).trimEnd()
  return { field: { text: value, start: at, end: at + value.length }, next, unclosed: false }
}

function fieldEnd(text: string, from: number, separator: number): number {
  for (let at = from; at < text.length; at++) {
    const code = text.charCodeAt(at)
    if (code === separator || code === NEWLINE || code === RETURN) return at
  }
  return text.length
}

function lineEnd(text: string, from: number): number {
  for (let at = from; at < text.length; at++) {
    const code = text.charCodeAt(at)
    if (code === NEWLINE || code === RETURN) return at
  }
  return text.length
}

function isSpace(code: number, separator: number): boolean {
  return code !== separator && (code === 32 || code === 9 || code === 0xa0)
}
