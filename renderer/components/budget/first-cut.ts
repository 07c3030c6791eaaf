import type { BudgetView, OrderColumns } from '../../../app/contract/shapes/budget.ts'
import { fewestForGoal, limitsOf, mostInside } from './cut-limits.ts'

/** Returns where a cut begins that nobody has chosen yet: inside all limits, at the least cost or the goal if known. */
export function firstCut(view: BudgetView, columns: OrderColumns): number {
  const limits = limitsOf(view, columns, 1)
  const most = Math.min(mostInside(limits, columns.patterns), columns.chosen)
  const marks = view.markers.find(({ order }) => order === columns.order)?.marks ?? []
  const wanted =
    marks.find(({ kind }) => kind === 'least-cost')?.cut ??
    fewestForGoal(limits) ??
    marks.find(({ kind }) => kind === 'knee')?.cut ??
    columns.chosen
  return Math.max(0, Math.min(Math.max(wanted, fewestForGoal(limits) ?? 0), most))
}
