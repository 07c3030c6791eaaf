import type { ChoiceProgress, ChoiceTask } from './choice-task.ts'
import { buildDualProblem, type DualProblem } from './dual-problem.ts'
import { LagrangianDual } from './lagrangian-dual.ts'

/** What no choice can beat, for each of a row of budgets. */
export type Ceiling = {
  /** Ascending, in the task's costs. */
  readonly budgets: Float64Array
  /** bounds[i]: no choice that respects the rules and costs at most budgets[i] detects more weight. Non-decreasing. */
  readonly bounds: Float64Array
  /** The multipliers that prove bounds[i] are `multipliers[proofOf[i]]`; −1 where no choice fits the budget. */
  readonly proofOf: Int32Array
  /** Whole numbers, one per row of the problem, in units of 1 / scale of its scaled weights. */
  readonly multipliers: readonly Float64Array[]
  readonly scale: number
  readonly problem: DualProblem
}

export type CeilingOptions = {
  /** Elementary steps to spend at most; the same effort gives the same bounds on every machine. */
  readonly effort?: number
  readonly onProgress?: ChoiceProgress
}

const USUAL_EFFORT = 3e9

/** Sums of costs that are not whole may round by less than this part; what takes exactly the budget has to fit. */
const ROUNDING_SLACK = 1e-11

/** Up to so many budgets each get multipliers of their own; of more, those at least an eighth apart do. */
const MANY_BUDGETS = 100
const ANCHOR_RATIO = 1.125

/** The budgets under which 1, 2, … nPatterns patterns fit, where costs count patterns. */
export function patternBudgets(nPatterns: number): Float64Array {
  return Float64Array.from({ length: nPatterns }, (_, at) => at + 1)
}

/**
 * Returns an upper bound on what any choice within each budget detects, or null when `onProgress` ended it early.
 * Multipliers are optimised at some of the budgets, from the smallest up; each set bounds every budget, and the least
 * bound counts, rounded down to what weights can add up to.
 * A budget that the kept patterns alone break gets what they detect, so that the bounds lie above every order.
 * SOURCE: Lagrangian dual of the linear relaxation of maximum coverage (LagrangianDual says how).
 */
export function ceilingOf(
  task: ChoiceTask,
  budgets: Float64Array,
  options: CeilingOptions = {},
): Ceiling | null {
  const { effort = USUAL_EFFORT, onProgress = () => true } = options
  const problem = buildDualProblem(task, () => onProgress(0, effort))
  if (problem === null || !onProgress(0, effort)) return null
  const dual = new LagrangianDual(problem)
  const slack =
    problem.cost.every(Number.isInteger) && Number.isInteger(problem.keptCost) ? 0 : ROUNDING_SLACK
  const free = budgets.map((budget) => budget * (1 + slack) - problem.keptCost)
  const floor = greedyFloor(problem, () => onProgress(0, effort))
  if (floor === null) return null

  const lowest = free.map((budget) => (budget < 0 ? 0 : Infinity))
  const proofOf = new Int32Array(budgets.length).fill(-1)
  const multipliers: Float64Array[] = []
  const keep = (lambda: Float64Array, bounds: Float64Array): void => {
    for (let at = 0; at < bounds.length; at++) {
      if (free[at] < 0 || bounds[at] >= lowest[at]) continue
      lowest[at] = bounds[at]
      proofOf[at] = multipliers.length
    }
    multipliers.push(lambda)
  }
  // Without multipliers the bound is what all patterns together detect.
  keep(
    new Float64Array(problem.nRows),
    free.map(() => dual.totalWeight * dual.scale),
  )

  const anchors = chooseAnchors(free, floor)
  const turns = effort / anchors.length / (problem.rowStart[problem.nRows] + 1)
  const patience = Math.max(6, Math.min(30, 2 * turns)) // measured: short where few turns can be paid for
  let spent = 0
  for (const [turn, anchor] of anchors.entries()) {
    const until = spent + (effort - spent) / (anchors.length - turn)
    const isDone = dual.descend(free[anchor], reachedAt(floor, free[anchor]), patience, (steps) => {
      spent += steps
      if (!onProgress(Math.min(spent, effort), effort)) return 'cancel'
      return spent < until ? 'go on' : 'enough'
    })
    if (!isDone) return null
    keep(dual.best.slice(), dual.boundsFor(free))
  }

  // Scaled weights are whole, and so is what any choice detects of them.
  const bounds = lowest.map(
    (bound) => Math.floor(problem.keptWeight + bound / dual.scale) / problem.weightScale,
  )
  return { budgets, bounds, proofOf, multipliers, scale: dual.scale, problem }
}

/** What a greedy choice reaches: once it has spent `cost[i]` it detects `weight[i]`. */
type Floor = { readonly cost: readonly number[]; readonly weight: readonly number[] }

function reachedAt({ cost, weight }: Floor, budget: number): number {
  const beyond = cost.findIndex((one) => one > budget)
  return weight[(beyond < 0 ? cost.length : beyond) - 1] ?? 0
}

/** Returns the places of the budgets to optimise for, up to the one within which the greedy choice detects everything. */
function chooseAnchors(free: Float64Array, { cost }: Floor): number[] {
  const enough = cost[cost.length - 1] ?? 0
  const places = [...free.keys()].filter((at) => free[at] > 0 && (at === 0 || free[at - 1] < enough))
  if (places.length <= MANY_BUDGETS) return places
  let last = 0
  return places.filter((at) => {
    if (free[at] < last * ANCHOR_RATIO && free[at] < enough) return false
    last = free[at]
    return true
  })
}

/** Chooses columns by gain per cost, on the problem's own order of columns, so that the bound does not hang on the file's. */
function greedyFloor(problem: DualProblem, goOn: () => boolean): Floor | null {
  const { nColumns, rowStart, rowItems, columnAt, columnEnd, columnItems, weight, cost } = problem
  const gain = new Float64Array(nColumns)
  for (let column = 0; column < nColumns; column++) {
    for (let at = columnAt[column]; at < columnEnd[column]; at++) gain[column] += weight[columnItems[at]]
  }
  const need = problem.need.slice()
  const isTaken = new Uint8Array(nColumns)
  const floor = { cost: [] as number[], weight: [] as number[] }
  let spent = 0
  let reached = 0
  while (goOn()) {
    let best = -1
    for (let column = 0; column < nColumns; column++) {
      if (isTaken[column] === 1 || gain[column] <= 0) continue
      if (best < 0 || gain[column] * cost[best] > gain[best] * cost[column]) best = column
    }
    if (best < 0) return floor
    isTaken[best] = 1
    for (let at = columnAt[best]; at < columnEnd[best]; at++) {
      const row = columnItems[at]
      if (need[row] === 0 || --need[row] > 0) continue
      reached += weight[row]
      for (let item = rowStart[row]; item < rowStart[row + 1]; item++) gain[rowItems[item]] -= weight[row]
    }
    spent += cost[best]
    floor.cost.push(spent)
    floor.weight.push(reached)
  }
  return null
}
