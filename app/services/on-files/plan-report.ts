import type { CoverageRun } from './coverage-of-files.ts'
import type { PlanOfFiles } from './plan-of-files.ts'
import type { InputFile } from '../../report/report-input.ts'
import { reportOfPlan, type ReportFormat } from '../../report/report-of-plan.ts'

/** What a report says of how it came about. */
export type ReportOrigin = {
  readonly date: string
  readonly version: string
  readonly commandLine: string
  readonly files: readonly InputFile[]
  readonly options: readonly { readonly label: string; readonly value: string }[]
}

/** Returns the report of a plan as the bytes of a file. */
export function planReport(
  run: CoverageRun,
  { plan, lost }: PlanOfFiles,
  origin: ReportOrigin,
  format: ReportFormat,
): Promise<Uint8Array<ArrayBuffer>> {
  const { netlist, faults, result, patterns } = run
  const { unusable } = netlist.report
  const timeOnly = patterns.timeOnly?.reduce((sum, flag) => sum + flag, 0) ?? 0
  const notices = unusable.map(({ kind, count }) => `${count} × ${kind}: taken as unknown.`)
  if (timeOnly > 0) {
    notices.push(`${timeOnly} patterns count for time, not for coverage: more than one time frame.`)
  }
  if (run.comparison !== null && run.comparison.total.mismatches > 0) {
    notices.push(
      `${run.comparison.total.mismatches} expected values differ from the fault-free circuit: the patterns may belong to another netlist revision.`,
    )
  }
  const names = (role: string): string =>
    origin.files
      .filter((file) => file.role === role)
      .map(({ name }) => name)
      .join(', ')
  const subject = `netlist ${names('netlist')}, patterns ${names('patterns')}`
  return reportOfPlan(
    { netlist, faults, profile: result.profile, plan, lost },
    { ...origin, subject, notices },
    format,
  )
}
