import { ceilingOf, patternBudgets } from '../engine/choose/ceiling.ts'
import { unitCosts } from '../engine/choose/choice-task.ts'
import { AppError } from '../contract/errors.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { DeskContext } from './desk-context.ts'
import type { PlanJobs, PlanRequest } from './plan-jobs.ts'
import { basisOf, heldDossier } from './run-dossier.ts'

/** Proves for every number of patterns what no choice of so many can beat. */
export function ceilingJob(
  input: PlanRequest,
  context: DeskContext<never>,
): DeskAnswer<PlanJobs['prove-ceiling']['output']> {
  const dossier = heldDossier(input.key)
  const { nPatterns } = dossier.patterns
  const task = { ...basisOf(dossier, input).task, costs: unitCosts(nPatterns) }
  const startedAt = performance.now()
  const proven = ceilingOf(task, patternBudgets(nPatterns), {
    onProgress: (done, total) => {
      context.report({ phase: 'Proving the ceiling', share: Math.min(1, done / total) })
      return !context.isCancelled()
    },
  })
  if (proven === null) throw new AppError('cancelled')
  const ceiling = new Float64Array(nPatterns + 1)
  ceiling.set(proven.bounds, 1)
  const seconds = ((performance.now() - startedAt) / 1000).toFixed(1)
  const note = `Proven in ${seconds} s from ${proven.multipliers.length} sets of multipliers (Lagrangian dual); it holds for these patterns, not for patterns that do not exist yet.`
  return new DeskAnswer({ ceiling, note }, [ceiling.buffer])
}
