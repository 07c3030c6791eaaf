import type { Assumptions, BudgetView, OrderName } from '../contract/shapes/budget.ts'
import type { Budget, ConstraintCosts, ImprovedChoice } from '../contract/shapes/budget.ts'
import type { MoneyView } from '../contract/shapes/money.ts'
import type { OutputOf } from '../contract/operations.ts'
import type { ReportSubject } from './export-subject.ts'
import type { NetlistInput } from './load-netlist.ts'
import type { ChoiceInput } from './run-dossier.ts'

export type HoldRunInput = {
  /** Names the run at the desk, for as long as its result stays what it is. */
  readonly key: string
  readonly netlistKey: string
  readonly netlist: NetlistInput
  readonly patterns: readonly Uint8Array[]
  readonly detectionLimit: number
  readonly segments: readonly (readonly Uint8Array[])[]
}

/** A held run, and what its plan stands on. */
export type PlanRequest = ChoiceInput & {
  readonly key: string
  readonly assumptions: Assumptions
}

export type CutOfPlan = PlanRequest & { readonly order: OrderName; readonly cut: number }

export type ExportFormat = 'html' | 'pdf' | 'xlsx' | 'csv' | 'vectors' | 'patterns-csv' | 'stil'

/** Work on a run that the desk holds; every job but the first throws 'not-found' where it does not. */
export type PlanJobs = {
  readonly 'hold-run': { readonly input: HoldRunInput; readonly output: null; readonly part: never }
  readonly view: {
    readonly input: PlanRequest & { readonly orders: readonly OrderName[] }
    readonly output: Omit<BudgetView, 'runId' | 'smallest'>
    readonly part: never
  }
  readonly figures: {
    readonly input: CutOfPlan
    readonly output: Budget['figures']
    readonly part: never
  }
  readonly money: { readonly input: CutOfPlan; readonly output: MoneyView; readonly part: never }
  readonly 'lost-faults': {
    readonly input: CutOfPlan & {
      readonly block: string | null
      readonly first: number
      readonly count: number
    }
    readonly output: OutputOf<'faults.lost'>
    readonly part: never
  }
  readonly 'make-export': {
    readonly input: CutOfPlan & { readonly format: ExportFormat; readonly subject: ReportSubject }
    readonly output: OutputOf<'exports.make'>
    readonly part: never
  }
  readonly 'prove-ceiling': {
    readonly input: PlanRequest
    readonly output: { readonly ceiling: Float64Array<ArrayBuffer>; readonly note: string }
    readonly part: never
  }
  readonly 'price-constraints': {
    readonly input: CutOfPlan
    readonly output: ConstraintCosts
    readonly part: never
  }
  readonly 'improve-choice': {
    readonly input: CutOfPlan & {
      readonly within: 'patterns' | 'cycles'
      readonly seconds: number
      /** The ceiling at the cut where it is proven already; of a choice of so many patterns. */
      readonly bound: number | null
    }
    readonly output: ImprovedChoice
    readonly part: never
  }
  readonly 'find-smallest': {
    readonly input: PlanRequest & { readonly seconds: number }
    readonly output: {
      readonly patterns: Uint32Array<ArrayBuffer>
      readonly lowerBound: number
      readonly proven: boolean
    }
    readonly part: never
  }
}
