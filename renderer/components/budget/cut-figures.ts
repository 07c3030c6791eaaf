import type { BudgetView, OrderColumns } from '../../../app/contract/shapes/budget.ts'

/** Everything known of one cut; NaN where the product does not say what it takes to know it. */
export type CutFigures = {
  readonly cut: number
  readonly patterns: number
  /** Detected once, or as often as the assumptions ask. */
  readonly detected: number
  readonly coverage: number
  /** Of the faults that are not proven untestable. */
  readonly testCoverage: number
  readonly detectedOnce: number
  /** Of the faults themselves, each counted once whatever it weighs. */
  readonly plainCoverage: number
  readonly cycles: number
  readonly milliseconds: number
  readonly perDeviceMilliseconds: number
  readonly vectorMemory: number
  readonly reloads: number
  readonly dppm: number
  readonly dppmLow: number
  readonly dppmHigh: number
  readonly costPerDevice: number
  /** Of test and escapes together. */
  readonly costPerYear: number
  readonly testerHoursPerYear: number
}

/** Returns the faults that curves show: detected once, or as often as the assumptions ask. */
export function detectedColumn(columns: OrderColumns, n: number): Float64Array {
  return n > 1 ? columns.detectedN : columns.detected
}

export function figuresAt(view: BudgetView, columns: OrderColumns, cut: number, n: number): CutFigures {
  const at = (column: Float64Array): number => column[cut] ?? NaN
  const detected = at(detectedColumn(columns, n))
  return {
    cut,
    patterns: columns.patterns,
    detected,
    coverage: detected / view.total,
    testCoverage: at(columns.detected) / (view.total * (1 - view.untestable / view.faults)),
    detectedOnce: at(columns.detected),
    plainCoverage: at(columns.detectedPlain) / view.faults,
    cycles: at(columns.cycles),
    milliseconds: at(columns.milliseconds),
    perDeviceMilliseconds: at(columns.perDeviceMilliseconds),
    vectorMemory: at(columns.vectorMemory),
    reloads: at(columns.reloads),
    dppm: at(columns.dppm),
    dppmLow: at(columns.dppmLow),
    dppmHigh: at(columns.dppmHigh),
    costPerDevice: at(columns.costPerDevice),
    costPerYear: at(columns.testCostPerYear) + at(columns.escapeCostPerYear),
    testerHoursPerYear: at(columns.testerHoursPerYear),
  }
}
