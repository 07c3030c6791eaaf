import type { PlanResult } from '../engine/choose/plan-result.ts'
import type { PlanOfFiles } from '../services/on-files/plan-of-files.ts'

/** What JSON says of a plan beyond the coverage of the set. */
export function planJson({ plan, lost, constraintCosts, improvement }: PlanOfFiles): object {
  const { orderName, ...result } = plan.result
  return {
    ...result,
    ...(result.sample === undefined ? {} : estimatesOf(plan.result)),
    orderName,
    lost: lost === null ? null : lost.filter((block) => block.lost > 0),
    constraintCosts: constraintCosts.map(({ part, cost, isInTheWay }) => ({
      kind: part.kind,
      entry: JSON.parse(part.text) as unknown,
      cost,
      isInTheWay,
    })),
    ...(improvement === null ? {} : { improvement }),
  }
}

/** Estimated numbers of faults, without digits that only say how they were added up. */
function estimatesOf({ curve, ceiling, gap, budget, sample }: PlanResult): object {
  const rounded = (faults: number): number => Math.round(faults * 1000) / 1000
  return {
    curve: curve.map(rounded),
    ceiling: ceiling.map(rounded),
    gap: gap === null ? null : rounded(gap),
    budget: { ...budget, detected: rounded(budget.detected), plainDetected: rounded(budget.plainDetected) },
    ...(sample === undefined
      ? {}
      : { sample: { ...sample, low: sample.low.map(rounded), high: sample.high.map(rounded) } }),
  }
}
