import { csvRow } from './csv-row.ts'
import { patternColumns } from './pattern-columns.ts'
import type { ReportInput } from './report-input.ts'

/** Yields the table of all patterns in their order as CSV, a row at a time, for writing to a file as it comes. */
export function* csvReport(input: ReportInput): Generator<string> {
  const columns = patternColumns(input)
  yield csvRow(columns.map(({ name }) => name))
  for (let k = 1; k <= input.plan.order.length; k++) yield csvRow(columns.map(({ at }) => at(k)))
}
