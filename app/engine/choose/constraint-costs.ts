import { bestPrefixOrSingle } from './best-prefix-or-single.ts'
import { compileRules } from './choice-rules.ts'
import type { ChoiceProgress, ChoiceTask } from './choice-task.ts'
import type { ConstraintKind, Constraints } from './constraints.ts'
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
  const total = parts.length + 1
  const weightFor = (turn: number, candidate: ChoiceTask): number | null | undefined => {
    const order = steepestFirst(candidate, (done, all) => onProgress(turn + done / all, total))
    return order === null ? undefined : (bestPrefixOrSingle(candidate, order, budget)?.weight ?? null)
  }
  const withAll = weightFor(0, task)
  if (withAll === undefined) return null
  const costs: ConstraintCost[] = []
  for (const [turn, part] of parts.entries()) {
    const { rules } = compileRules(constraintsWithout(constraints, part), task.matrix.nPatterns)
    if (rules === null)
      throw new Error('constraints that hold together also hold together without one of them')
    const without = weightFor(turn + 1, { ...task, rules })
    if (without === undefined) return null
    const weightWithout = Math.max(without ?? 0, withAll ?? 0)
    const isInTheWay = withAll === null && without !== null
    costs.push({ part, weightWithout, cost: weightWithout - (withAll ?? 0), isInTheWay })
  }
  return costs
}

/** Returns the constraints without one part. */
export function constraintsWithout(
  constraints: Constraints,
  { kind, from, to }: ConstraintPart,
): Constraints {
  const rest = <T>(list: readonly T[]): readonly T[] => list.filter((_, at) => at < from || at >= to)
  return { ...constraints, [kind]: rest<unknown>(constraints[kind]) }
}
