import type { Plan, PlanInput } from '../../engine/choose/build-plan.ts'
import { bestPrefixOrSingle } from '../../engine/choose/best-prefix-or-single.ts'
import { meets } from '../../engine/choose/budget.ts'
import { type ChoiceBasis, rulesKeeping } from '../../engine/choose/choice-basis.ts'
import { withSlack, type ChoiceTask } from '../../engine/choose/choice-task.ts'
import { deliveredOrder } from '../../engine/choose/delivered-order.ts'
import { spendingUnder, type Spending } from '../../engine/choose/headroom.ts'
import { improveAtBudget } from '../../engine/choose/improve-at-budget.ts'
import type { MipSolver } from '../../engine/choose/mip.ts'
import type { Order } from '../../engine/choose/order.ts'
import { steepestFirst } from '../../engine/choose/steepest-first.ts'
import { progressOf, wholeOf, type FileWork } from './file-work.ts'
import { requirePlan, untilLater, withEvenCosts, type PlanChoice } from './plan-choice.ts'

/** What a search at the cut brought. */
export type Improvement = {
  /** Weight of the faults detected more at the limit. */
  readonly gained: number
  /** Patterns less to the goal. */
  readonly patternsSaved: number
  /** True where no choice at this budget is better. */
  readonly proven: boolean
}

type Improved = { readonly plan: Plan; readonly order: Order; readonly improvement: Improvement | null }

/**
 * Returns a better plan than the prefix of an order, or null where there is none and none was asked for. Where patterns
 * cost differently, the best single pattern may beat the prefix; whatever was asked, that is looked at. With `improve`
 * the choice at the cut is improved: under limits to more, for a goal to fewer patterns.
 */
export function improvePlan(
  input: PlanInput,
  first: Plan,
  basis: ChoiceBasis,
  choice: PlanChoice,
  solveMip: MipSolver,
  work: FileWork,
): Improved | null {
  const single = choice.order === 'steepest' ? betterSingle(input, first, basis, work) : null
  const start = single ?? { plan: first, order: input.order, improvement: null }
  if (!choice.improve) return single
  const search = { solveMip, onProgress: untilLater(work, 'Improving the choice', choice.searchSeconds) }
  const { cut } = start.plan.result
  return cut.stop === null && choice.goals.length > 0 && cut.unmet.length === 0
    ? fewerToGoal(input, start, basis, search, work)
    : moreAtLimit(input, start, basis, search, work)
}

type Search = { readonly solveMip: MipSolver; readonly onProgress: () => boolean }

function betterSingle(input: PlanInput, first: Plan, basis: ChoiceBasis, work: FileWork): Improved | null {
  const { stop } = first.result.cut
  const spending = stop === null ? null : spendingUnder(stop, first.pricing)
  if (spending === null || spending.costs.every((cost) => cost === spending.costs[0])) return null
  const task = { ...basis.task, costs: spending.costs }
  const best = bestPrefixOrSingle(task, input.order, spending.budget)
  if (best === null || best.from === 'prefix') return null
  const candidate = planKeeping(input, basis, best.patterns, work)
  return isBetter(candidate.plan, first) ? { ...candidate, improvement: null } : null
}

function moreAtLimit(
  input: PlanInput,
  start: Improved,
  basis: ChoiceBasis,
  search: Search,
  work: FileWork,
): Improved {
  const { result, pricing } = start.plan
  const { stop, patterns } = result.cut
  const nothing = {
    ...start,
    improvement: { gained: 0, patternsSaved: 0, proven: result.gap === 0 && input.sample === undefined },
  }
  const spending = stop === null ? null : spendingUnder(stop, pricing)
  if (spending === null || patterns === 0) return nothing
  const task: ChoiceTask = { ...basis.task, costs: spending.costs }
  const chosen = result.budget.chosen.map((pattern) => pattern - 1)
  // A bound on the sample that is quoted from says nothing of the one that is chosen on.
  const isWhole = input.sample === undefined
  const bound = result.gap === null || !isWhole ? {} : { bound: result.budget.detected + result.gap }
  const found = improveAtBudget(task, chosen, spending.budget, { ...search, ...bound })
  if (found === null) return nothing
  const proven = isWhole && found.proven
  const tighter = isWhole ? { ...input, ceiling: tightenedCeiling(input, spending, found.bound) } : input
  const candidate = found.gained === 0 ? null : planKeeping(tighter, basis, found.patterns, work)
  if (candidate === null || !isBetter(candidate.plan, start.plan)) {
    const plan = requirePlan({ ...tighter, order: start.order })
    return { plan, order: start.order, improvement: { gained: 0, patternsSaved: 0, proven } }
  }
  const gained = candidate.plan.result.budget.detected - result.budget.detected
  return { ...candidate, improvement: { gained, patternsSaved: 0, proven } }
}

/** Returns the ceiling by number of patterns with what the search has proven of its budget, where patterns cost the same. */
function tightenedCeiling(
  { ceiling }: PlanInput,
  { costs, budget }: Spending,
  bound: number,
): Float64Array | null {
  const cost = costs[0] ?? 0
  if (ceiling === null || cost === 0 || costs.some((one) => one !== cost)) return ceiling
  const fitting = Math.floor(withSlack(budget) / cost)
  return ceiling.map((most, at) => (at < fitting ? Math.min(most, bound) : most))
}

/** Takes one pattern after the other away, as long as a choice of so many still meets the goals. */
function fewerToGoal(
  input: PlanInput,
  start: Improved,
  basis: ChoiceBasis,
  search: Search,
  work: FileWork,
): Improved {
  const task = withEvenCosts(basis.task)
  const before = start.plan.result.budget.patterns
  let best = start
  let proven = false
  while (best.plan.result.budget.patterns > 1 && search.onProgress()) {
    const { chosen, patterns } = best.plan.result.budget
    const fewer = chosen.slice(0, patterns - 1).map((pattern) => pattern - 1)
    const bound = input.sample === undefined ? input.ceiling?.[patterns - 2] : undefined
    if (bound !== undefined && !reaches(input, bound)) {
      proven = true
      break
    }
    const found = improveAtBudget(task, fewer, patterns - 1, {
      ...search,
      ...(bound === undefined ? {} : { bound }),
    })
    if (found === null) break
    const candidate = planKeeping(input, basis, found.patterns, work)
    const { isReached, budget } = candidate.plan.result
    if (!isReached || budget.patterns >= patterns) {
      proven = input.sample === undefined && found.proven
      break
    }
    best = { ...candidate, improvement: null }
  }
  return {
    ...best,
    improvement: { gained: 0, patternsSaved: before - best.plan.result.budget.patterns, proven },
  }
}

/** True where a choice of that weight could meet all goals of coverage. */
function reaches({ goals, total }: PlanInput, weight: number): boolean {
  return goals.every((goal) => goal.kind !== 'coverage' || meets(goal, total > 0 ? weight / total : 0))
}

function isBetter({ result }: Plan, than: Plan): boolean {
  return result.cut.broken === null && result.budget.detected > than.result.budget.detected
}

/** Returns the plan whose order runs these patterns before all others, in the manner of the order that was asked for. */
function planKeeping(
  input: PlanInput,
  basis: ChoiceBasis,
  patterns: ArrayLike<number>,
  work: FileWork,
): { plan: Plan; order: Order } {
  const rules = rulesKeeping(basis, patterns)
  const order =
    input.order.name === 'as-delivered'
      ? deliveredOrder(rules)
      : wholeOf(steepestFirst({ ...basis.task, rules }, progressOf(work, 'Ordering')))
  const named = { ...order, name: input.order.name }
  return { plan: requirePlan({ ...input, order: named }), order: named }
}
