import type { InputFile } from '../report/report-input.ts'

/** How the netlist and patterns of an export are called, and what its report says of them. */
export type ReportSubject = {
  readonly product: string
  readonly netlist: string
  readonly patternSet: string
  readonly date: string
  readonly version: string
  readonly files: readonly InputFile[]
}
