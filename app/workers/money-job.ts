import type { MoneyView } from '../contract/shapes/money.ts'
import type { Plan } from '../engine/choose/build-plan.ts'
import type { Goal, Limit } from '../engine/choose/budget.ts'
import type { MovedOutcome, TimeOutcome } from '../engine/choose/plan-result.ts'
import type { PointFigures } from '../engine/choose/point-figures.ts'
import { leastTotal } from '../engine/choose/stopping-rules.ts'
import type { WhatIfGrid } from '../engine/quality/what-if.ts'
import { DeskAnswer } from './desk-answer.ts'
import { modelNote } from './model-note.ts'
import type { CutOfPlan, PlanJobs } from './plan-jobs.ts'
import { planAtCut, planOfRun } from './plan-of-run.ts'
import { heldDossier, orderOf, type RunDossier } from './run-dossier.ts'

/** Works out what a cut costs, how far each input moves that, and what other equipment would change. */
export function moneyJob(input: PlanJobs['money']['input']): DeskAnswer<MoneyView> {
  const dossier = heldDossier(input.key)
  const { result, priced, pricing } = planAtCut(dossier, input)
  const wanted = planWanted(dossier, input)
  const { budget, whatIf } = result
  const { chosen, sequence } = orderOf(dossier, input.order, input)
  const output: MoneyView = {
    cut: budget.patterns,
    patterns: sequence.length,
    chosen,
    currency: pricing.tester.currency,
    testCostPerYear: priced.testCostPerYear,
    escapeCostPerYear: priced.escapeCostPerYear,
    totalPerYear: priced.totalPerYear,
    costPerDevice: priced.costPerDevice,
    leastTotalCut: priced.totalPerYear === null ? null : leastTotal(priced.totalPerYear, chosen),
    wantedCut: wanted?.result.budget.patterns ?? null,
    at: figuresOf(budget),
    modelNote: modelNote({ pricing, deliveredCoverage: priced.testCoverage.at(-1) ?? 0 }),
    narrowings: [...result.bandNarrowings],
    sensitivity: result.sensitivity.map(({ input: moved, low, high }, at) => {
      const asked = wanted?.result.sensitivity[at]
      return {
        input: moved,
        low: movedTo(low, asked?.low.outcome),
        high: movedTo(high, asked?.high.outcome),
      }
    }),
    chainsByShiftRate:
      whatIf.chainsByShiftRate === null
        ? null
        : gridOf(whatIf.chainsByShiftRate, pricing.time.chains, pricing.tester.shiftMHz),
    sitesByEfficiency: gridOf(
      whatIf.sitesByEfficiency,
      pricing.tester.sites,
      pricing.tester.multiSiteEfficiency,
    ),
    insertions: result.insertions === null ? null : [...result.insertions],
  }
  return new DeskAnswer(output)
}

function figuresOf({
  perDeviceMilliseconds,
  meanPerDeviceMilliseconds,
  dppm,
  dppmLow,
  dppmHigh,
  testedPerYear,
  hoursPerYear,
  capacityHoursPerYear,
}: PointFigures): MoneyView['at'] {
  return {
    perDeviceMilliseconds,
    meanPerDeviceMilliseconds,
    dppm,
    dppmLow,
    dppmHigh,
    testedPerYear,
    hoursPerYear,
    capacityHoursPerYear,
  }
}

/** The plan that limits and goals ask for, wherever the cut stands; null where there are none. */
function planWanted(dossier: RunDossier, input: CutOfPlan): Plan | null {
  const { maxMilliseconds, minCoverage, maxDppm } = input.assumptions.limits
  const limits: Limit[] = maxMilliseconds === null ? [] : [{ kind: 'milliseconds', most: maxMilliseconds }]
  const goals: Goal[] = [
    ...(minCoverage === null ? [] : [{ kind: 'coverage', least: minCoverage } as const]),
    ...(maxDppm === null ? [] : [{ kind: 'dppm', most: maxDppm } as const]),
  ]
  if (limits.length + goals.length === 0) return null
  return planOfRun(dossier, input, orderOf(dossier, input.order, input), { limits, goals })
}

function movedTo(
  { value, outcome }: { readonly value: number; readonly outcome: MovedOutcome },
  asked: MovedOutcome | undefined,
): MoneyView['sensitivity'][number]['low'] {
  return {
    value,
    dppm: outcome.dppm,
    perDeviceMilliseconds: outcome.perDeviceMilliseconds,
    costPerDevice: outcome.costPerDevice,
    totalPerYear: outcome.totalPerYear,
    leastTotalCut: outcome.leastTotalPatterns,
    leastTotal: outcome.leastTotal,
    wantedCut: asked?.patterns ?? null,
  }
}

function gridOf(
  { rows, columns, outcomes }: WhatIfGrid<TimeOutcome>,
  row: number,
  column: number,
): MoneyView['sitesByEfficiency'] {
  return {
    rows: [...rows],
    columns: [...columns],
    now: { row, column },
    outcomes: outcomes.map((each) => [...each]),
  }
}
