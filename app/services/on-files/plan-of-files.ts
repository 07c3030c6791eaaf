import { AppError } from '../../contract/errors.ts'
import type { Plan, PlanInput } from '../../engine/choose/build-plan.ts'
import { ceilingOf, patternBudgets, type Ceiling } from '../../engine/choose/ceiling.ts'
import {
  choiceBasis,
  orderOfChoice,
  scanFactsOf,
  type ChoiceBasis,
} from '../../engine/choose/choice-basis.ts'
import type { ChoiceTask } from '../../engine/choose/choice-task.ts'
import { constraintCosts, type ConstraintCost } from '../../engine/choose/constraint-costs.ts'
import { deliveredOrder } from '../../engine/choose/delivered-order.ts'
import { type FaultSample, standsFor } from '../../engine/choose/fault-sample.ts'
import { lostBlocks, type LostBlock } from '../../engine/choose/lost-blocks.ts'
import type { MipSolver } from '../../engine/choose/mip.ts'
import type { Order } from '../../engine/choose/order.ts'
import type { SampledFaults } from '../../engine/choose/plan-pricing.ts'
import type { PlanResult } from '../../engine/choose/plan-result.ts'
import type { FaultList } from '../../engine/faults/fault-list.ts'
import { smallestCompleteSet } from '../../engine/choose/smallest-complete-set.ts'
import { steepestFirst } from '../../engine/choose/steepest-first.ts'
import { buildTimeModel } from '../../engine/tester/time-model.ts'
import type { CoverageRun } from './coverage-of-files.ts'
import { progressOf, valueOf, wholeOf, type FileWork } from './file-work.ts'
import { improvePlan, type Improvement } from './improve-plan.ts'
import { requirePlan, untilLater, withEvenCosts, type PlanChoice } from './plan-choice.ts'
import { rowsByBurst, withProgram } from './program-constraints.ts'
import type { FileAssumptions } from './read-assumptions.ts'
import type { Samples } from './sampling.ts'

export type PlanOfFiles = {
  readonly plan: Plan
  readonly basis: ChoiceBasis
  readonly order: Order
  /** By number of patterns. */
  readonly ceiling: Ceiling
  /** Null where the plan is made from a sample: faults that were not drawn are not known to be lost. */
  readonly lost: readonly LostBlock[] | null
  /** What each constraint costs at the cut; empty where there are none. */
  readonly constraintCosts: readonly ConstraintCost[]
  /** Null where none was asked for. */
  readonly improvement: Improvement | null
}

/**
 * Chooses an order and a cut of a simulated set. From samples the order is chosen on one and everything is quoted from the
 * other, since an order looks better on the faults that it was chosen on. Throws AppError 'bad-file', 'bad-input',
 * 'cancelled'.
 */
export function planOfFiles(
  run: CoverageRun,
  samples: Samples | null,
  assumptions: FileAssumptions,
  choice: PlanChoice,
  solveMip: MipSolver,
  patternFile: string,
  work: FileWork,
): PlanOfFiles {
  const { tester, product } = assumptions
  const { netlist, faults, patterns } = run
  const program = rowsByBurst(assumptions.program, patterns)
  const scan = scanFactsOf(netlist)
  const basisFrom = (sample: FaultSample | null): ChoiceBasis =>
    basisOf(run, sample, samples, { ...assumptions, program }, choice.detections, patternFile, work)
  const basis = basisFrom(samples?.quote ?? null)
  const choosing = samples === null ? basis : basisFrom(samples.choose)
  const { task, total } = basis
  const ceiling = wholeOf(
    ceilingOf(withEvenCosts(task), patternBudgets(patterns.nPatterns), {
      onProgress: progressOf(work, 'Proving the ceiling'),
    }),
  )
  const { order: chosenOrder, smallest } = orderOf(choosing, choice, solveMip, work)
  // Patterns without a gain on the sample may detect faults that were not drawn: a goal looks at all of them.
  const goesOn = samples !== null && choice.goals.length > 0
  const order = goesOn ? { ...chosenOrder, chosen: chosenOrder.runs } : chosenOrder
  const input: PlanInput = {
    faults,
    untestable: null,
    task,
    total,
    order,
    patterns,
    patternFile,
    scan,
    tester,
    product,
    program,
    limits: choice.limits,
    goals: choice.goals,
    ceiling: knownBounds(ceiling.bounds, assumptions.weights === null ? samples : null),
    ceilingWithin: (costs, budget) => ceilingWithin({ ...task, costs }, budget, work),
    // Of a sample it is no smallest set of the whole list.
    smallest: samples === null ? smallest : null,
    ...(samples === null ? {} : { sample: sampledFaults(samples, faults) }),
  }
  const first = requirePlan(input)
  const improved = improvePlan(input, first, choosing, choice, solveMip, work)
  const plan = improved?.plan ?? first
  const chosen = plan.result.budget.chosen.map((pattern) => pattern - 1)
  const constraints = basis.constraints
  return {
    plan,
    basis,
    order: improved?.order ?? order,
    ceiling,
    lost: samples === null ? lostBlocks(task, faults, chosen) : null,
    constraintCosts:
      constraints === null || constraints.parts.length === 0
        ? []
        : wholeOf(
            constraintCosts(
              choosing.task,
              constraints.constraints,
              constraints.parts,
              chosen.reduce((sum, pattern) => sum + (task.costs[pattern] ?? 0), 0),
              progressOf(work, 'Pricing constraints'),
            ),
          ),
    improvement: improved?.improvement ?? null,
  }
}

function basisOf(
  { netlist, faults, patterns, result: { matrix } }: CoverageRun,
  sample: FaultSample | null,
  samples: Samples | null,
  { tester, product, program, constraints, weights }: FileAssumptions,
  detections: number,
  patternFile: string,
  work: FileWork,
): ChoiceBasis {
  if (matrix === null) throw new Error('a plan needs the matrix of detections')
  const costs = buildTimeModel(tester, product, patterns, scanFactsOf(netlist)).patternCycles
  const reading = choiceBasis({
    faults,
    matrix,
    costs,
    constraints,
    weights,
    detections,
    ...(sample === null || samples === null
      ? {}
      : { standsFor: standsFor(sample, samples.population, faults.nClasses) }),
  })
  const sources = [constraints, weights].filter((source) => source !== null)
  return withProgram(valueOf(work, reading, sources), program, patterns, patternFile)
}

/** Weights scaled up from a sample are no whole numbers, and bounds round up: no choice detects more than the whole set. */
function knownBounds(bounds: Float64Array, samples: Samples | null): Float64Array {
  return samples === null ? bounds : bounds.map((bound) => Math.min(bound, samples.population))
}

function sampledFaults({ quote, population, seed }: Samples, { nClasses }: FaultList): SampledFaults {
  return { size: quote.size, population, seed, standsFor: standsFor(quote, population, nClasses) }
}

function orderOf(
  basis: ChoiceBasis,
  choice: PlanChoice,
  solveMip: MipSolver,
  work: FileWork,
): { readonly order: Order; readonly smallest: NonNullable<PlanResult['smallest']> | null } {
  const { task } = basis
  switch (choice.order) {
    case 'as-delivered':
      return { order: deliveredOrder(task.rules), smallest: null }
    case 'steepest':
      return { order: wholeOf(steepestFirst(task, progressOf(work, 'Ordering'))), smallest: null }
    case 'smallest': {
      const onProgress = untilLater(work, 'Looking for the smallest complete set', choice.searchSeconds)
      const found = smallestCompleteSet(choice.smallestBy === 'cycles' ? task : withEvenCosts(task), {
        solveMip,
        onProgress,
      })
      if (work.isCancelled()) throw new AppError('cancelled')
      if (found === null) {
        throw new AppError(
          'bad-input',
          `No complete set was found in ${choice.searchSeconds} s. Give the search longer with --search-seconds, or take --order steepest, which detects as much.`,
        )
      }
      const { patterns, cost, lowerBound, proven } = found
      return {
        order: orderOfChoice(basis, patterns),
        smallest: {
          patterns: patterns.length,
          lowerBound,
          proven,
          ...(choice.smallestBy === 'cycles' ? { cycles: cost } : {}),
        },
      }
    }
  }
}

/** The bound at one budget; smaller budgets on the way to it bring the multipliers near. */
const STEPS = 12
const STEP_RATIO = 0.7
const EFFORT = 6e8

function ceilingWithin(task: ChoiceTask, budget: number, work: FileWork): number {
  const budgets = Float64Array.from({ length: STEPS }, (_, at) => budget * STEP_RATIO ** (STEPS - 1 - at))
  const onProgress = progressOf(work, 'Proving the ceiling at the cut')
  const { bounds } = wholeOf(ceilingOf(task, budgets, { effort: EFFORT, onProgress }))
  return bounds[STEPS - 1] ?? 0
}
