import { unitCosts } from '../engine/choose/choice-task.ts'
import { smallestCompleteSet } from '../engine/choose/smallest-complete-set.ts'
import { AppError } from '../contract/errors.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { DeskContext } from './desk-context.ts'
import { highsBeside } from './highs-solver.ts'
import type { PlanJobs } from './plan-jobs.ts'
import { basisOf, heldDossier } from './run-dossier.ts'

/**
 * Finds the fewest patterns that detect all that the whole set detects, and a bound that no such set can undercut. The
 * search stops with the best so far after the seconds it is given.
 */
export async function smallestJob(
  input: PlanJobs['find-smallest']['input'],
  context: DeskContext<never>,
): Promise<DeskAnswer<PlanJobs['find-smallest']['output']>> {
  const dossier = heldDossier(input.key)
  const { task } = basisOf(dossier, input)
  const startedAt = performance.now()
  const found = smallestCompleteSet(
    { ...task, costs: unitCosts(dossier.patterns.nPatterns), detections: 1 },
    {
      solveMip: highsBeside(context.threads.simulateScript),
      onProgress: () => {
        const seconds = (performance.now() - startedAt) / 1000
        context.report({
          phase: 'Looking for the smallest complete set',
          share: Math.min(1, seconds / input.seconds),
        })
        return !context.isCancelled() && seconds < input.seconds
      },
    },
  )
  if (found === null) {
    const message = `No complete set was found in ${input.seconds} s. The steepest order detects as much.`
    throw context.isCancelled() ? new AppError('cancelled') : new AppError('out-of-reach', message)
  }
  const patterns = Uint32Array.from(found.patterns)
  return new DeskAnswer({ patterns, lowerBound: found.lowerBound, proven: found.proven }, [patterns.buffer])
}
