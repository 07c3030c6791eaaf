import { patternWidth, responseWidth, type Circuit } from '../../circuit/circuit.ts'
import { PatternSetBuilder } from '../../simulate/pattern-set-builder.ts'
import type { PatternSet } from '../../simulate/pattern-set.ts'
import { closestName } from '../../source/closest-name.ts'
import {
  MAX_DIAGNOSTICS,
  type Diagnostic,
  type DiagnosticCode,
  type Reading,
} from '../../source/diagnostic.ts'
import type { ReadingProgress } from '../../source/reading-progress.ts'
import type { Source } from '../../source/source.ts'
import { csvRecords, csvSeparator, type CsvField, type CsvRecord } from './csv-records.ts'

/** Before an output's name in a header: the column expects a value there instead of giving one. */
export const EXPECT_PREFIX = 'expect '

type Column = { readonly kind: 'input' | 'expect' | 'cycles'; readonly row: number }

const PROGRESS_STEP = 4_000_000

/**
 * Reads patterns from CSV (RFC 4180; comma, semicolon or tab). The header row names the signals, in any order: a primary
 * input or flip-flop (0, 1, X or empty for X), `expect NAME` for a primary output or the data of flip-flop NAME
 * (L, H, 0, 1; X is not observed, empty says nothing), `cycles` for the tester cycles. Every input and flip-flop needs a column.
 * Errors: empty-file, no-patterns, unknown-signal, missing-signal, duplicate-declaration, pattern-width,
 * unknown-character, out-of-range, syntax.
 */
export function readPatternCsv(
  source: Source,
  circuit: Circuit,
  options: { onProgress?: ReadingProgress } = {},
): Reading<PatternSet> {
  const { text, name: file } = source
  const diagnostics: Diagnostic[] = []
  const report = (
    code: DiagnosticCode,
    field: { start: number; end: number },
    message: string,
    hint?: string,
  ): void => {
    diagnostics.push({
      code,
      severity: 'error',
      file,
      span: { start: field.start, end: Math.max(field.end, field.start) },
      message,
      ...(hint ? { hint } : {}),
    })
  }
  const nothing = { start: 0, end: 0 }
  const records = csvRecords(text, csvSeparator(text))
  const header = records.next()
  if (header.done) {
    report(
      'empty-file',
      nothing,
      'the file is empty',
      "Expected a header row with the signals' names, then one row a pattern.",
    )
    return { value: null, diagnostics }
  }
  const columns = readHeader(header.value, circuit, report)
  if (diagnostics.length > 0) return { value: null, diagnostics }

  const nColumns = columns.length
  const capacity = Math.ceil((text.length + 1) / Math.max(2, nColumns))
  const builder = new PatternSetBuilder(patternWidth(circuit), responseWidth(circuit), capacity)
  let nextProgress = PROGRESS_STEP
  for (const record of records) {
    const { fields, unclosedAt } = record
    const number = builder.nPatterns + 1
    if (unclosedAt >= 0)
      report('syntax', { start: unclosedAt, end: unclosedAt + 1 }, 'a quotation mark is never closed')
    if (fields.length !== nColumns) {
      const last = fields[fields.length - 1]
      report(
        'pattern-width',
        { start: fields[0].start, end: last.end },
        `pattern ${number} has ${fields.length} fields; the header names ${nColumns}`,
      )
    } else {
      columns.forEach((column, index) => readCell(column, fields[index], number, builder, report))
    }
    builder.endPattern()
    if (diagnostics.length >= MAX_DIAGNOSTICS) {
      report('too-many', fields[0], `${MAX_DIAGNOSTICS} errors found; reading stopped here`)
      break
    }
    if (fields[0].start >= nextProgress) {
      nextProgress = fields[0].start + PROGRESS_STEP
      if (options.onProgress?.(fields[0].start, text.length) === false) return { value: null, diagnostics }
    }
  }
  if (diagnostics.length === 0 && builder.nPatterns === 0) {
    report(
      'no-patterns',
      nothing,
      'the file has a header but no pattern',
      'Add one row a pattern below the header.',
    )
  }
  return { value: diagnostics.length > 0 ? null : builder.finish(file), diagnostics }
}

type Report = (
  code: DiagnosticCode,
  field: { start: number; end: number },
  message: string,
  hint?: string,
) => void

/** What each column holds; reports unknown, doubled and missing signals. */
function readHeader(header: CsvRecord, circuit: Circuit, report: Report): Column[] {
  const { names, inputs, outputs, flipFlops } = circuit
  const known = new Map<string, Column>([['cycles', { kind: 'cycles', row: 0 }]])
  inputs.forEach((net, row) => known.set(names[net], { kind: 'input', row }))
  flipFlops.forEach((net, row) => {
    known.set(names[net], { kind: 'input', row: inputs.length + row })
    known.set(EXPECT_PREFIX + names[net], { kind: 'expect', row: outputs.length + row })
  })
  outputs.forEach((net, row) => known.set(EXPECT_PREFIX + names[net], { kind: 'expect', row }))

  const columns: Column[] = []
  const seen = new Set<string>()
  for (const field of header.fields) {
    const column = known.get(field.text)
    if (column === undefined) {
      const closest = closestName(field.text, known.keys())
      report(
        'unknown-signal',
        field,
        `"${field.text}" is no input, flip-flop or "${EXPECT_PREFIX}output" of "${circuit.name}"`,
        closest === null ? undefined : `Did you mean "${closest}"?`,
      )
      continue
    }
    if (seen.has(field.text)) report('duplicate-declaration', field, `column "${field.text}" stands twice`)
    seen.add(field.text)
    columns.push(column)
  }
  const missing = [...inputs, ...flipFlops].filter((net) => !seen.has(names[net]))
  if (missing.length > 0 && columns.length === header.fields.length) {
    const listed = missing.slice(0, 5).map((net) => names[net])
    report(
      'missing-signal',
      { start: header.fields[0].start, end: header.fields[header.fields.length - 1].end },
      `${missing.length} of ${patternWidth(circuit)} inputs and flip-flops have no column: ${listed.join(', ')}${missing.length > 5 ? ', …' : ''}`,
      'Add a column for each; leave its cells empty where the value is X.',
    )
  }
  return columns
}

function readCell(
  column: Column,
  field: CsvField,
  pattern: number,
  builder: PatternSetBuilder,
  report: Report,
): void {
  const cell = field.text.toUpperCase()
  if (column.kind === 'cycles') {
    if (cell === '') return
    const cycles = Number(cell)
    if (!Number.isInteger(cycles) || cycles < 1 || cycles > 0xffffffff) {
      report(
        'out-of-range',
        field,
        `cycles of pattern ${pattern} must be a whole number from 1, found "${field.text}"`,
      )
    } else builder.setCycles(cycles)
    return
  }
  if (column.kind === 'input') {
    if (cell === '1') builder.setInput(column.row, 1)
    else if (cell === 'X' || cell === '') builder.setInput(column.row, 'X')
    else if (cell !== '0') report('unknown-character', field, `expected 0, 1 or X, found "${field.text}"`)
    return
  }
  if (cell === 'H' || cell === '1') builder.expect(column.row, 1)
  else if (cell === 'L' || cell === '0') builder.expect(column.row, 0)
  else if (cell === 'X') builder.mask(column.row)
  else if (cell !== '') report('unknown-character', field, `expected L, H or X, found "${field.text}"`)
}
