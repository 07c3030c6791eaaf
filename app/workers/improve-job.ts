import { bestPrefixOrSingle } from '../engine/choose/best-prefix-or-single.ts'
import { rulesKeeping } from '../engine/choose/choice-basis.ts'
import { type ChoiceTask, unitCosts } from '../engine/choose/choice-task.ts'
import { cutPlaces } from '../engine/choose/cut-places.ts'
import { detectedWeight } from '../engine/choose/detected-weight.ts'
import { improveAtBudget } from '../engine/choose/improve-at-budget.ts'
import { steepestFirst } from '../engine/choose/steepest-first.ts'
import { AppError } from '../contract/errors.ts'
import type { ImprovedChoice } from '../contract/shapes/budget.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { DeskContext } from './desk-context.ts'
import { highsBeside } from './highs-solver.ts'
import type { PlanJobs } from './plan-jobs.ts'
import { basisOf, heldDossier, orderOf } from './run-dossier.ts'

/**
 * Improves the choice at a cut, within as many patterns or as many tester cycles, for as long as it is given. It begins
 * with the better of that choice and the steepest first, so that it never ends below either.
 */
export function improveJob(
  input: PlanJobs['improve-choice']['input'],
  context: DeskContext<never>,
): DeskAnswer<ImprovedChoice> {
  const dossier = heldDossier(input.key)
  const basis = basisOf(dossier, input)
  const shown = orderOf(dossier, input.order, input)
  if (cutPlaces(shown, basis.task.rules)[input.cut] !== 1) {
    throw new AppError(
      'bad-input',
      'The cut goes against the constraints. Move it to where it respects them.',
    )
  }
  const isCounted = input.within === 'patterns'
  const task: ChoiceTask = isCounted
    ? { ...basis.task, costs: unitCosts(dossier.patterns.nPatterns) }
    : basis.task
  const prefix = shown.sequence.subarray(0, input.cut)
  const budget = prefix.reduce((sum, pattern) => sum + (task.costs[pattern] ?? 0), 0)
  const before = detectedWeight(task, prefix)
  const steepest = orderOf(dossier, 'steepest', input)
  const greedy = bestPrefixOrSingle(task, steepest, budget)
  const start = greedy !== null && greedy.weight > before ? greedy.patterns : prefix

  const startedAt = performance.now()
  const secondsSoFar = (): number => (performance.now() - startedAt) / 1000
  const found = improveAtBudget(task, start, budget, {
    ...(isCounted && input.bound !== null ? { bound: input.bound } : {}),
    solveMip: highsBeside(context.threads.simulateScript),
    onProgress: () => {
      context.report({
        phase: 'Looking for a better choice',
        share: Math.min(1, secondsSoFar() / input.seconds),
      })
      return !context.isCancelled() && secondsSoFar() < input.seconds
    },
  })
  if (context.isCancelled()) throw new AppError('cancelled')
  if (found === null) {
    throw new AppError('out-of-reach', `Nothing could be tried within ${input.seconds} s. Give it longer.`)
  }
  // The choice steepest first, and then whatever gains most on top of it.
  const behind = steepestFirst({ ...basis.task, rules: rulesKeeping(basis, found.patterns) })
  if (behind === null) throw new Error('nothing asked the order to end')
  return new DeskAnswer({
    order: Array.from(behind.sequence.subarray(0, behind.chosen), (pattern) => pattern + 1),
    cut: found.patterns.length,
    detected: found.weight,
    before,
    steepest: greedy?.weight ?? 0,
    bound: found.bound,
    proven: found.proven,
    seconds: secondsSoFar(),
  })
}
