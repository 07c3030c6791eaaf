import type { WeightRow } from '../../choose/fault-weights.ts'
import {
  type Diagnostic,
  type DiagnosticCode,
  MAX_DIAGNOSTICS,
  type Reading,
} from '../../source/diagnostic.ts'
import type { Source, Span } from '../../source/source.ts'

const LARGEST_WEIGHT = 1e6

/**
 * Reads a weights file: one `fault or block,weight` a line. The weight stands after the last comma, so that names may
 * hold commas; a name in double quotation marks loses them. `#` starts a comment line; a first line whose last field is
 * no number is the header.
 * Codes: 'empty-file', 'syntax', 'out-of-range', 'duplicate-declaration', 'too-many'.
 */
export function readWeights(source: Source): Reading<readonly WeightRow[]> {
  const { text, name: file } = source
  const rows: WeightRow[] = []
  const lineOf = new Map<string, Span>()
  const diagnostics: Diagnostic[] = []
  let isFirst = true
  const report = (code: DiagnosticCode, span: Span, message: string, hint: string): void => {
    diagnostics.push({ code, severity: 'error', file, span, message, hint })
  }

  const lines = /([^\r\n]*)(\r\n|\r|\n|$)/g
  lines.lastIndex = text.charCodeAt(0) === 0xfeff ? 1 : 0
  for (let match = lines.exec(text); match !== null && match.index < text.length; match = lines.exec(text)) {
    const line = match[1]
    const at = match.index
    if (line.trim() === '' || line.trimStart().startsWith('#')) continue
    const wasFirst = isFirst
    isFirst = false
    const comma = line.lastIndexOf(',')
    const field = line.slice(comma + 1).trim()
    const weight = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/.test(field) ? Number(field) : NaN
    const span = { start: at, end: at + line.trimEnd().length }
    const fieldSpan = { start: at + comma + 1, end: span.end }
    const name = unquoted(line.slice(0, Math.max(0, comma)).trim())
    if (comma >= 0 && Number.isNaN(weight) && wasFirst) continue
    if (comma < 0) {
      report(
        'syntax',
        span,
        `found "${shortened(line.trim())}" without a comma`,
        'Write a fault or a block, a comma, and its weight',
      )
    } else if (name === '') {
      report(
        'syntax',
        span,
        'the name before the comma is empty',
        'Write a fault or a block before the comma',
      )
    } else if (Number.isNaN(weight)) {
      report(
        'syntax',
        fieldSpan,
        `found "${shortened(field)}" where a weight is expected`,
        'Write a number such as 2 or 0.5, with a decimal point',
      )
    } else if (weight < 0 || weight > LARGEST_WEIGHT) {
      report(
        'out-of-range',
        fieldSpan,
        `the weight of "${shortened(name)}" is ${field}`,
        `Write a number from 0 to ${LARGEST_WEIGHT}`,
      )
    } else if (lineOf.has(name)) {
      const notes = [{ file, span: lineOf.get(name) ?? span, message: 'here first' }]
      const message = `"${shortened(name)}" is given a weight twice`
      diagnostics.push({
        code: 'duplicate-declaration',
        severity: 'error',
        file,
        span,
        message,
        hint: 'Remove one of the lines',
        notes,
      })
    } else {
      lineOf.set(name, span)
      rows.push({ name, weight, span })
    }
    if (diagnostics.length === MAX_DIAGNOSTICS) {
      report(
        'too-many',
        span,
        `${MAX_DIAGNOSTICS} errors found; reading stopped here`,
        'Put these right first',
      )
      break
    }
  }
  if (rows.length === 0 && diagnostics.length === 0) {
    report('empty-file', { start: 0, end: 0 }, 'the file gives no weight', 'Write lines such as core/alu,2')
  }
  return { value: diagnostics.length > 0 ? null : rows, diagnostics }
}

function unquoted(name: string): string {
  return /^".*"$/.test(name) ? name.slice(1, -1).replaceAll('""', '"') : name
}

function shortened(text: string): string {
  return text.length > 60 ? `${text.slice(0, 57)}...` : text
}
