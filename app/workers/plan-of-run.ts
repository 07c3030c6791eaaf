import { AppError } from '../contract/errors.ts'
import { buildPlan, type Plan, type PlanInput } from '../engine/choose/build-plan.ts'
import { scanFactsOf } from '../engine/choose/choice-basis.ts'
import type { Order } from '../engine/choose/order.ts'
import type { PlanBasis } from '../engine/choose/plan-pricing.ts'
import { planProblems } from '../engine/choose/plan-problems.ts'
import type { Product } from '../engine/quality/product.ts'
import type { Contradiction } from '../engine/tester/assumption-field.ts'
import type { CutOfPlan } from './plan-jobs.ts'
import { basisOf, type ChoiceInput, orderOf, type RunDossier } from './run-dossier.ts'

/**
 * Returns what every plan of a held run is priced on. Throws AppError 'bad-input', with the field in its details, where
 * the product does not fit netlist and pattern set.
 */
export function planBasisOf(dossier: RunDossier, choice: ChoiceInput): PlanBasis {
  const { netlist, faults, patterns } = dossier
  const { tester, product } = choice
  const [problem] = planProblems(product, faults, patterns)
  if (problem !== undefined) throw refusalOf(problem)
  return {
    faults,
    untestable: null,
    task: basisOf(dossier, choice).task,
    patterns,
    patternFile: '',
    scan: scanFactsOf(netlist),
    tester,
    product,
    program: [],
  }
}

/** Returns the plan of an order of a held run under limits and goals. Throws as planBasisOf does. */
export function planOfRun(
  dossier: RunDossier,
  choice: ChoiceInput,
  order: Order,
  wanted: Pick<PlanInput, 'limits' | 'goals'>,
): Plan {
  const { plan } = buildPlan({
    ...planBasisOf(dossier, choice),
    ...wanted,
    total: basisOf(dossier, choice).total,
    order,
    ceiling: null,
    ceilingWithin: () => null,
    smallest: null,
  })
  if (plan === null) throw new Error('planBasisOf lets only sound products through')
  return plan
}

/**
 * Returns the plan of a cut: its patterns are the limit, with the time limit beside them where the cut lies within it.
 * The cut may lie behind the last pattern with a gain.
 */
export function planAtCut(dossier: RunDossier, input: CutOfPlan): Plan {
  const order = orderOf(dossier, input.order, input)
  const stretched = { ...order, chosen: Math.max(order.chosen, input.cut) }
  const own = { kind: 'patterns', most: input.cut } as const
  const { maxMilliseconds } = input.assumptions.limits
  const plain = planOfRun(dossier, input, stretched, { limits: [own], goals: [] })
  if (maxMilliseconds === null || plain.result.budget.milliseconds > maxMilliseconds) return plain
  const time = { kind: 'milliseconds', most: maxMilliseconds } as const
  return planOfRun(dossier, input, stretched, { limits: [own, time], goals: [] })
}

function refusalOf({ key, message, hint }: Contradiction<Product>): AppError {
  const sentence = `${message.charAt(0).toUpperCase()}${message.slice(1)}`
  return new AppError('bad-input', `${sentence}. ${hint}.`, { field: key })
}
