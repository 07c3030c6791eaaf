import type { ReportInput } from './report-input.ts'

/** A column of the table of patterns as files give it: full precision, the units of files. */
export type PatternColumn = {
  readonly name: string
  /** The head that people read, with its unit. */
  readonly head: string
  /** A spreadsheet's number format. */
  readonly format: string
  /** The value at place k of the order, from 1. */
  readonly at: (k: number) => number
}

/** Returns the columns of the table of patterns; those of a year only where a year is worked out. */
export function patternColumns({ plan, curve, priced, pricing }: ReportInput): readonly PatternColumn[] {
  const { currency } = pricing.tester
  const share = (k: number): number => (curve.total > 0 ? (curve.detected[k] ?? 0) / curve.total : 0)
  const of = (values: Float64Array) => (k: number) => values[k] ?? 0
  const columns: PatternColumn[] = [
    { name: 'place', head: 'Place', format: '#,##0', at: (k) => k },
    { name: 'pattern', head: 'Pattern', format: '#,##0', at: (k) => plan.order[k - 1] ?? 0 },
    { name: 'in_budget', head: 'In the budget', format: '0', at: (k) => (k <= plan.budget.patterns ? 1 : 0) },
    {
      name: 'gain',
      head: 'Gain, faults',
      format: '#,##0',
      at: (k) => (curve.detected[k] ?? 0) - (curve.detected[k - 1] ?? 0),
    },
    { name: 'detected', head: 'Detected, faults', format: '#,##0', at: of(curve.detected) },
    { name: 'coverage', head: 'Coverage', format: '0.000%', at: share },
    ...bandColumns(plan),
    { name: 'cycles', head: 'Cycles', format: '#,##0', at: of(priced.cycles) },
    { name: 'milliseconds', head: 'One site, ms', format: '#,##0.000', at: of(priced.milliseconds) },
    {
      name: 'per_device_milliseconds',
      head: 'Per device, ms',
      format: '#,##0.000',
      at: of(priced.perDeviceMilliseconds),
    },
    {
      name: 'vector_memory',
      head: 'Vector memory, cycles per pin',
      format: '#,##0',
      at: of(priced.vectorMemory),
    },
    { name: 'reloads', head: 'Reloads', format: '#,##0', at: of(priced.reloads) },
    { name: 'dppm', head: 'DPPM, estimated', format: '#,##0.0', at: of(priced.dppm) },
    { name: 'dppm_low', head: 'DPPM, low', format: '#,##0.0', at: of(priced.dppmLow) },
    { name: 'dppm_high', head: 'DPPM, high', format: '#,##0.0', at: of(priced.dppmHigh) },
    {
      name: 'cost_per_device',
      head: `Cost per device, ${currency}`,
      format: '0.000000',
      at: of(priced.costPerDevice),
    },
  ]
  const years: readonly [string, string, Float64Array | null][] = [
    ['hours_per_year', 'Tester hours a year', priced.hoursPerYear],
    ['test_cost_per_year', `Cost of test a year, ${currency}`, priced.testCostPerYear],
    ['escape_cost_per_year', `Cost of escapes a year, ${currency}`, priced.escapeCostPerYear],
    ['total_per_year', `Total a year, ${currency}`, priced.totalPerYear],
  ]
  for (const [name, head, values] of years) {
    if (values !== null) columns.push({ name, head, format: '#,##0', at: of(values) })
  }
  return columns
}

/** Between what the faults detected of the whole list lie, where the curve is of a sample. */
function bandColumns({ sample, isWeighted }: ReportInput['plan']): readonly PatternColumn[] {
  if (sample === undefined || isWeighted) return []
  const { low, high } = sample
  return [
    { name: 'detected_low', head: 'Detected, low', format: '#,##0', at: (k) => low[k - 1] ?? 0 },
    { name: 'detected_high', head: 'Detected, high', format: '#,##0', at: (k) => high[k - 1] ?? 0 },
  ]
}
