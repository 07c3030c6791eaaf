import { dirname, extname, join } from 'node:path'
import { pathToFileURL } from 'node:url'
import { unitCosts } from '../engine/choose/choice-task.ts'
import { smallestCompleteSet } from '../engine/choose/smallest-complete-set.ts'
import { AppError } from '../contract/errors.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { DeskContext } from './desk-context.ts'
import { createHighsSolver } from './highs-solver.ts'
import type { PlanJobs, PlanRequest } from './plan-jobs.ts'
import { basisOf, heldDossier } from './run-dossier.ts'

/** The search stops with the best so far after this long. */
const MOST_SECONDS = 30

/** Finds the fewest patterns that detect all that the whole set detects, and a bound that no such set can undercut. */
export async function smallestJob(
  input: PlanRequest,
  context: DeskContext<never>,
): Promise<DeskAnswer<PlanJobs['find-smallest']['output']>> {
  const dossier = heldDossier(input.key)
  const { task } = basisOf(dossier, input)
  const solveMip = createHighsSolver(siblingThread(context.threads.simulateScript, 'highs-worker'))
  const startedAt = performance.now()
  const found = smallestCompleteSet(
    { ...task, costs: unitCosts(dossier.patterns.nPatterns), detections: 1 },
    {
      solveMip,
      onProgress: () => {
        const seconds = (performance.now() - startedAt) / 1000
        context.report({
          phase: 'Looking for the smallest complete set',
          share: Math.min(1, seconds / MOST_SECONDS),
        })
        return !context.isCancelled() && seconds < MOST_SECONDS
      },
    },
  )
  if (found === null) {
    const message = `No complete set was found in ${MOST_SECONDS} s. The steepest order detects as much.`
    throw context.isCancelled() ? new AppError('cancelled') : new AppError('out-of-reach', message)
  }
  const patterns = Uint32Array.from(found.patterns)
  return new DeskAnswer({ patterns, lowerBound: found.lowerBound, proven: found.proven }, [patterns.buffer])
}

/** The script of another kind of thread, which lies beside the one given in sources and bundles alike. */
function siblingThread(script: string, name: string): URL {
  return pathToFileURL(join(dirname(script), `${name}${extname(script)}`))
}
