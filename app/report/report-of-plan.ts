import type { LostBlock } from '../engine/choose/lost-blocks.ts'
import type { Plan } from '../engine/choose/build-plan.ts'
import type { Netlist } from '../engine/circuit/netlist.ts'
import type { FaultList } from '../engine/faults/fault-list.ts'
import { FAULT_STATES, type DetectionProfile, type FaultState } from '../engine/simulate/detection-profile.ts'
import { stateOfFault } from '../engine/faults/fault-state.ts'
import { ALL_SECTIONS, type InputFile, type ReportInput } from './report-input.ts'

/** What a report says of where its plan comes from. */
export type ReportSource = {
  readonly date: string
  readonly version: string
  readonly subject: string
  readonly files: readonly InputFile[]
  readonly options: ReportInput['options']
  readonly commandLine: string
  readonly notices: readonly string[]
}

export type PlannedRun = {
  readonly netlist: Netlist
  readonly faults: FaultList
  readonly profile: DetectionProfile
  readonly plan: Plan
  readonly lost: readonly LostBlock[] | null
}

export type ReportFormat = 'html' | 'pdf' | 'xlsx' | 'csv'

export const REPORT_MEDIA_TYPES: Readonly<Record<ReportFormat, string>> = {
  html: 'text/html; charset=utf-8',
  pdf: 'application/pdf',
  xlsx: 'application/vnd.openxmlformats-officedocument.spreadsheetml.sheet',
  csv: 'text/csv; charset=utf-8',
}

/** Returns a report of a plan as the bytes of a file. Each format's writer is loaded when it is asked for. */
export async function reportOfPlan(
  run: PlannedRun,
  source: ReportSource,
  format: ReportFormat,
): Promise<Uint8Array<ArrayBuffer>> {
  const input = reportInputOf(run, source)
  const encode = (text: string): Uint8Array<ArrayBuffer> => new TextEncoder().encode(text)
  switch (format) {
    case 'html': {
      const [{ buildReport }, { htmlReport }] = await Promise.all([
        import('./build-report.ts'),
        import('./html-report.ts'),
      ])
      return encode(htmlReport(buildReport(input)))
    }
    case 'pdf': {
      const [{ buildReport }, { pdfReport }] = await Promise.all([
        import('./build-report.ts'),
        import('./pdf-report.ts'),
      ])
      return new Uint8Array(await pdfReport(buildReport(input), source.date))
    }
    case 'xlsx':
      return new Uint8Array(await (await import('./xlsx-report.ts')).xlsxReport(input))
    case 'csv':
      return encode(Array.from((await import('./csv-report.ts')).csvReport(input)).join(''))
  }
}

function reportInputOf(
  { netlist, faults, profile, plan, lost }: PlannedRun,
  source: ReportSource,
): ReportInput {
  const { circuit, report } = netlist
  return {
    ...source,
    title: null,
    author: null,
    company: null,
    circuit: {
      name: circuit.name,
      inputs: circuit.inputs.length,
      outputs: circuit.outputs.length,
      flipFlops: circuit.flipFlops.length,
      gates: report.gates,
    },
    faultBase: faults.base,
    collapsedFaults: faults.nClasses,
    states: statesOf(faults, profile),
    counts: plan.counts,
    plan: plan.result,
    curve: plan.curve,
    priced: plan.priced,
    pricing: plan.pricing,
    lost,
    paper: 'A4',
    sections: ALL_SECTIONS,
  }
}

function statesOf(faults: FaultList, profile: DetectionProfile): ReportInput['states'] {
  const counts = new Map<FaultState, number>()
  for (let fault = 0; fault < faults.nFaults; fault++) {
    const state = stateOfFault(faults, profile, fault)
    counts.set(state, (counts.get(state) ?? 0) + 1)
  }
  return FAULT_STATES.flatMap((state) => {
    const count = counts.get(state)
    return count === undefined ? [] : [{ state, faults: count }]
  })
}
