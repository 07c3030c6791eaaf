import { closestName } from '../../source/closest-name.ts'
import type { Reading } from '../../source/diagnostic.ts'
import { FindingList, quoted } from '../../source/finding-list.ts'
import type { Source } from '../../source/source.ts'
import type { ProgramRow } from '../../tester/program.ts'
import { csvRecords, csvSeparator, type CsvField } from '../csv/csv-records.ts'

/** The columns of a test program list, as they stand in the file. The first alone must be there. */
export const PROGRAM_COLUMNS = [
  'burst',
  'kind',
  'file',
  'patterns',
  'measured ms',
  'set-up ms',
  'must stay',
  'must be first',
] as const

type ProgramColumn = (typeof PROGRAM_COLUMNS)[number]

const YES = new Set(['yes', 'y', 'true', '1', 'x'])
const NO = new Set(['no', 'n', 'false', '0', ''])

const MAX_ROWS = 100_000
const MAX_MS = 1e9

/**
 * Reads a test program list: a CSV file with a header row of PROGRAM_COLUMNS in any order, one row a part of the program.
 * Times are milliseconds on one site; where the separator is a semicolon a decimal comma is read too. Errors: a column
 * that is not known or there twice, a value of the wrong kind, a burst named twice, two rows that must both be first.
 */
export function readProgram(source: Source): Reading<readonly ProgramRow[]> {
  const findings = new FindingList()
  const rows = new ProgramReader(source, findings).read()
  const value = findings.hasErrors ? null : rows
  return { value, diagnostics: findings.finish() }
}

class ProgramReader {
  private readonly source: Source
  private readonly findings: FindingList
  private readonly separator: ',' | ';' | '\t'
  private readonly columns = new Map<ProgramColumn, number>()

  constructor(source: Source, findings: FindingList) {
    this.source = source
    this.findings = findings
    this.separator = csvSeparator(source.text)
  }

  read(): ProgramRow[] {
    const rows: ProgramRow[] = []
    let header: readonly CsvField[] | null = null
    const placeOf = new Map<string, CsvField>()
    let firstRow: CsvField | null = null
    for (const { fields, unclosedAt } of csvRecords(this.source.text, this.separator)) {
      if (this.findings.isFull) return rows
      if (unclosedAt >= 0) {
        const message = 'a quotation mark opens here and is never closed'
        this.findings.error('truncated', this.source, unclosedAt, unclosedAt + 1, message)
        return rows
      }
      if (header === null) {
        header = fields
        if (!this.readHeader(fields)) return rows
        continue
      }
      if (rows.length === MAX_ROWS) {
        this.error('limit', fields[0], `more than ${MAX_ROWS} rows; no more are read`)
        return rows
      }
      const row = this.readRow(fields, header.length)
      if (row === null) continue
      const first = placeOf.get(row.burst)
      if (first !== undefined) {
        this.error('duplicate-declaration', fields[0], `burst ${quoted(row.burst)} has a row already`, {
          notes: [
            {
              file: this.source.name,
              span: { start: first.start, end: first.end },
              message: 'the first is here',
            },
          ],
          hint: 'Give each burst one row.',
        })
      }
      placeOf.set(row.burst, this.field(fields, 'burst') ?? fields[0])
      if (row.mustBeFirst) {
        if (firstRow !== null) {
          const message = `only one part can be first, and ${quoted(rows.find((other) => other.mustBeFirst)?.burst ?? '')} must be already`
          this.error('duplicate-declaration', this.field(fields, 'must be first') ?? fields[0], message)
        }
        firstRow = fields[0]
      }
      rows.push(row)
    }
    if (header === null) {
      this.findings.error('empty-file', this.source, 0, 0, 'the file has no header row', {
        hint: `The first line names the columns: ${PROGRAM_COLUMNS.join(', ')}.`,
      })
    } else if (rows.length === 0 && !this.findings.hasErrors) {
      this.error('empty-file', header[0], 'the list has a header and no row')
    }
    return rows
  }

  private readHeader(fields: readonly CsvField[]): boolean {
    fields.forEach((field, at) => {
      const name = simplified(field.text)
      const column = PROGRAM_COLUMNS.find((known) => simplified(known) === name)
      if (column === undefined) {
        const closest = closestName(field.text, PROGRAM_COLUMNS)
        this.error('unknown-name', field, `${quoted(field.text)} is no column of a test program list`, {
          hint: closest === null ? `Columns: ${PROGRAM_COLUMNS.join(', ')}.` : `Did you mean "${closest}"?`,
        })
      } else if (this.columns.has(column)) {
        this.error('duplicate-declaration', field, `the column ${quoted(field.text)} is there twice`)
      } else this.columns.set(column, at)
    })
    if (!this.columns.has('burst') && !this.findings.hasErrors) {
      this.error(
        'missing-signal',
        fields[0],
        'the column "burst" is missing; expected the name of each part in it',
      )
    }
    return !this.findings.hasErrors
  }

  private readRow(fields: readonly CsvField[], width: number): ProgramRow | null {
    if (fields.length > width) {
      this.error(
        'width-mismatch',
        fields[width],
        `the row has ${fields.length} fields; the header has ${width}`,
      )
      return null
    }
    const text = (column: ProgramColumn): string => this.field(fields, column)?.text ?? ''
    if (text('burst') === '') {
      this.error('missing-signal', fields[0], 'the row has no burst; expected a name')
      return null
    }
    return {
      burst: text('burst'),
      kind: text('kind'),
      file: text('file'),
      patterns: this.number(fields, 'patterns', true),
      measuredMs: this.number(fields, 'measured ms', false),
      setupMs: this.number(fields, 'set-up ms', false),
      mustStay: this.flag(fields, 'must stay'),
      mustBeFirst: this.flag(fields, 'must be first'),
    }
  }

  private number(fields: readonly CsvField[], column: ProgramColumn, whole: boolean): number | null {
    const field = this.field(fields, column)
    if (field === undefined || field.text === '') return null
    const text = this.separator === ';' ? field.text.replace(',', '.') : field.text
    const value = /^\d+(\.\d*)?(e[+-]?\d+)?$|^\.\d+$/i.test(text) ? Number(text) : NaN
    if (Number.isNaN(value) || (whole && !Number.isInteger(value))) {
      const wanted = whole ? 'a whole number' : 'a number of milliseconds'
      this.error('syntax', field, `expected ${wanted} under ${quoted(column)}, found ${quoted(field.text)}`)
      return null
    }
    if (value > MAX_MS) {
      this.error('out-of-range', field, `${field.text} under ${quoted(column)} is more than ${MAX_MS}`)
      return null
    }
    return value
  }

  private flag(fields: readonly CsvField[], column: ProgramColumn): boolean {
    const field = this.field(fields, column)
    const word = field?.text.toLowerCase() ?? ''
    if (field !== undefined && !YES.has(word) && !NO.has(word)) {
      this.error('syntax', field, `expected yes or no under ${quoted(column)}, found ${quoted(field.text)}`)
    }
    return YES.has(word)
  }

  private field(fields: readonly CsvField[], column: ProgramColumn): CsvField | undefined {
    const at = this.columns.get(column)
    return at === undefined ? undefined : fields[at]
  }

  private error(
    code: Parameters<FindingList['error']>[0],
    field: CsvField,
    message: string,
    extras: Parameters<FindingList['error']>[5] = {},
  ): void {
    this.findings.error(code, this.source, field.start, field.end, message, extras)
  }
}

function simplified(name: string): string {
  return name.toLowerCase().replace(/[^a-z]/g, '')
}
