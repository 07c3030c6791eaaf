import {
  type ConstraintAlternatives,
  constraintAlternatives,
  type ConstraintPart,
  costsOfParts,
} from '../engine/choose/constraint-costs.ts'
import { CONSTRAINT_KINDS } from '../engine/choose/constraints.ts'
import { AppError } from '../contract/errors.ts'
import type { ConstraintCosts } from '../contract/shapes/budget.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { DeskContext } from './desk-context.ts'
import type { CutOfPlan } from './plan-jobs.ts'
import { basisKey, basisOf, heldDossier, orderOf } from './run-dossier.ts'

/** Choosing anew without each kind takes long, reading off a cut does not: those of the last constraints are kept. */
let last: { readonly key: string; readonly alternatives: ConstraintAlternatives } | null = null

/** Tells what each kind of constraint costs a choice that takes no more tester cycles than the cut. */
export function constraintCostsJob(
  input: CutOfPlan,
  context: DeskContext<never>,
): DeskAnswer<ConstraintCosts> {
  const dossier = heldDossier(input.key)
  const { task, constraints } = basisOf(dossier, input)
  const given = constraints?.constraints
  if (given === undefined) return new DeskAnswer({ detected: 0, rows: [] })

  const key = `${input.key} ${basisKey(input.assumptions, task.costs)}`
  if (last?.key !== key) {
    const parts = CONSTRAINT_KINDS.flatMap((kind): ConstraintPart[] =>
      given[kind].length === 0 ? [] : [{ kind, from: 0, to: given[kind].length, text: kind }],
    )
    const alternatives = constraintAlternatives(task, given, parts, (done, total) => {
      context.report({ phase: 'Choosing without each constraint', share: Math.min(1, done / total) })
      return !context.isCancelled()
    })
    if (alternatives === null) throw new AppError('cancelled')
    last = { key, alternatives }
  }
  const chosen = orderOf(dossier, input.order, input).sequence.subarray(0, input.cut)
  const budget = chosen.reduce((sum, pattern) => sum + (task.costs[pattern] ?? 0), 0)
  const { weight, costs } = costsOfParts(last.alternatives, budget)
  return new DeskAnswer({
    detected: weight,
    rows: costs.map(({ part, cost, isInTheWay }) => ({ kind: part.kind, cost, isInTheWay })),
  })
}
