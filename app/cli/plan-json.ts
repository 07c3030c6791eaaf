import type { PlanOfFiles } from '../services/on-files/plan-of-files.ts'

/** What JSON says of a plan beyond the coverage of the set. */
export function planJson({ plan, lost, constraintCosts, improvement }: PlanOfFiles): object {
  const { orderName, ...result } = plan.result
  return {
    ...result,
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
