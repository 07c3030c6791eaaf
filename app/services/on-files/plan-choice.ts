import { AppError } from '../../contract/errors.ts'
import { buildPlan, type Plan, type PlanInput } from '../../engine/choose/build-plan.ts'
import type { Goal, Limit } from '../../engine/choose/budget.ts'
import { unitCosts, type ChoiceTask } from '../../engine/choose/choice-task.ts'
import type { FileWork } from './file-work.ts'

/** How patterns are to be chosen, and where the cut is to lie. */
export type PlanChoice = {
  readonly order: 'as-delivered' | 'steepest' | 'smallest'
  /** What a smallest complete set has least of. */
  readonly smallestBy: 'patterns' | 'cycles'
  /** How many patterns have to detect a fault. */
  readonly detections: number
  readonly limits: readonly Limit[]
  readonly goals: readonly Goal[]
  readonly improve: boolean
  /** Searches for a smallest set and for a better choice end with the best so far after this long. */
  readonly searchSeconds: number
}

/** Returns the task with patterns counted, not their cycles. */
export function withEvenCosts(task: ChoiceTask): ChoiceTask {
  return { ...task, costs: unitCosts(task.matrix.nPatterns) }
}

/** Returns a plan. Throws AppError 'bad-input' where the product does not fit netlist and pattern set. */
export function requirePlan(input: PlanInput): Plan {
  const { plan, problems } = buildPlan(input)
  if (plan !== null) return plan
  const reasons = problems.map(({ key, message, hint }) => `"${key}": ${message}. ${hint}.`)
  throw new AppError('bad-input', `The product does not fit netlist and patterns:\n  ${reasons.join('\n  ')}`)
}

/** Returns what a search reports to, which ends it after so long, or when the work is cancelled. */
export function untilLater(work: FileWork, phase: string, seconds: number): () => boolean {
  const startedAt = performance.now()
  return () => {
    const share = (performance.now() - startedAt) / 1000 / seconds
    work.report({ phase, share: Math.min(1, share) })
    return share < 1 && !work.isCancelled()
  }
}
