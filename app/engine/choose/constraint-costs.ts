import { bestPrefixOrSingle } from './best-prefix-or-single.ts'
import { compileRules } from './choice-rules.ts'
import type { ChoiceProgress, ChoiceTask } from './choice-task.ts'
import type { ConstraintKind, Constraints } from './constraints.ts'
import type { Order } from './order.ts'
import { steepestFirst } from './steepest-first.ts'

/** Constraints that the user gave as one: entries `from` to `to` − 1 of the list of that kind. */
export type ConstraintPart = {
  readonly kind: ConstraintKind
  readonly from: number
  readonly to: number
  /** As written, such as `10-20` or `[3, 7]`. */
  readonly text: string
}

export type ConstraintCost = {
  readonly part: ConstraintPart
  /** What the best choice found detects without this part, all other constraints as they are. */
  readonly weightWithout: number
  /** How much more that is; 0 where leaving the part away gains nothing. */
  readonly cost: number
  /** True where nothing fits the budget with this part, and something does without it. */
  readonly isInTheWay: boolean
}

/** A choice under all constraints or all but one part, with its steepest order, from which any budget can be read. */
type Alternative = { readonly task: ChoiceTask; readonly order: Order }

export type ConstraintAlternatives = {
  readonly withAll: Alternative
  /** Null where the rest would contradict itself without the part, as pairs in a circle do that were left out. */
  readonly without: readonly { readonly part: ConstraintPart; readonly choice: Alternative | null }[]
}

/**
 * Returns what each part of the constraints costs at a budget, choosing anew without it, steepest first. Null when
 * `onProgress` ended it early.
 */
export function constraintCosts(
  task: ChoiceTask,
  constraints: Constraints,
  parts: readonly ConstraintPart[],
  budget: number,
  onProgress: ChoiceProgress = () => true,
): ConstraintCost[] | null {
  const alternatives = constraintAlternatives(task, constraints, parts, onProgress)
  return alternatives === null ? null : costsOfParts(alternatives, budget).costs
}

/** Returns the choices that tell what each part costs, whatever the budget. Null when `onProgress` ended it early. */
export function constraintAlternatives(
  task: ChoiceTask,
  constraints: Constraints,
  parts: readonly ConstraintPart[],
  onProgress: ChoiceProgress = () => true,
): ConstraintAlternatives | null {
  const total = parts.length + 1
  const choose = (turn: number, candidate: ChoiceTask): Alternative | null => {
    const order = steepestFirst(candidate, (done, all) => onProgress(turn + done / all, total))
    return order === null ? null : { task: candidate, order }
  }
  const withAll = choose(0, task)
  if (withAll === null) return null
  const without: { part: ConstraintPart; choice: Alternative | null }[] = []
  for (const [turn, part] of parts.entries()) {
    const { rules } = compileRules(constraintsWithout(constraints, part), task.matrix.nPatterns)
    const choice = rules === null ? null : choose(turn + 1, { ...task, rules })
    if (rules !== null && choice === null) return null
    without.push({ part, choice })
  }
  return { withAll, without }
}

/** Returns what each part costs at a budget, and what the best choice found detects with all of them (0: none fits). */
export function costsOfParts(
  { withAll, without }: ConstraintAlternatives,
  budget: number,
): { weight: number; costs: ConstraintCost[] } {
  const weightOf = ({ task, order }: Alternative): number | null =>
    bestPrefixOrSingle(task, order, budget)?.weight ?? null
  const given = weightOf(withAll)
  const costs = without.map(({ part, choice }): ConstraintCost => {
    const other = choice === null ? null : weightOf(choice)
    const weightWithout = Math.max(other ?? 0, given ?? 0)
    const isInTheWay = given === null && other !== null
    return { part, weightWithout, cost: weightWithout - (given ?? 0), isInTheWay }
  })
  return { weight: given ?? 0, costs }
}

/** Returns the constraints without one part. */
export function constraintsWithout(
  constraints: Constraints,
  { kind, from, to }: ConstraintPart,
): Constraints {
  const rest = <T>(list: readonly T[]): readonly T[] => list.filter((_, at) => at < from || at >= to)
  return { ...constraints, [kind]: rest<unknown>(constraints[kind]) }
}
