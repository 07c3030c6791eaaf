import { ceilingOf } from './ceiling.ts'
import { type ChoiceProgress, type ChoiceTask, withSlack } from './choice-task.ts'
import { detectedWeight } from './detected-weight.ts'
import { buildDualProblem, type DualProblem } from './dual-problem.ts'
import { MipRows, type MipSolver } from './mip.ts'
import { SwapSearch } from './swap-search.ts'

export type ImprovedChoice = {
  /** In file order. */
  readonly patterns: Uint32Array
  readonly weight: number
  /** What it detects more than the choice that it began with. */
  readonly gained: number
  /** No choice within the budget detects more. */
  readonly bound: number
  /** True where weight and bound meet. */
  readonly proven: boolean
}

export type ImproveOptions = {
  /** False ends the search with the best so far: a time limit and a cancel both come this way. */
  readonly onProgress?: ChoiceProgress
  readonly solveMip?: MipSolver
  /** The ceiling at this budget where it is known already; else one is worked out. */
  readonly bound?: number
  /** The solver is asked only for problems of at most so many detections. */
  readonly mostDetections?: number
}

/**
 * Improves a choice within a budget: takes a unit out and fills up with what then gains most, as long as that detects
 * more, and then hands problems that are small enough to the solver. The choice has to fit and to respect the rules;
 * units that wait for others, or that others wait for, stay as they are.
 * Null when ended before anything was tried.
 */
export function improveAtBudget(
  task: ChoiceTask,
  chosen: ArrayLike<number>,
  budget: number,
  options: ImproveOptions = {},
): ImprovedChoice | null {
  const { onProgress = () => true, solveMip, mostDetections = 200_000 } = options
  const { rules } = task
  let done = 0
  const goOn = (): boolean => onProgress(Math.min(done++, 1000), 1000)
  const ceiling = options.bound ?? ceilingAt(task, budget, goOn)
  const settled = withSettledPairs(task, chosen)
  const problem = ceiling === null ? null : buildDualProblem(settled.task, goOn)
  if (ceiling === null || problem === null) return null

  const free = withSlack(budget) - problem.keptCost
  const swaps = new SwapSearch(problem, settled.columnsOf(problem), free, settled.isFree)
  swaps.improve(Math.floor(ceiling * problem.weightScale) - problem.keptWeight, goOn)
  let columns = swaps.chosen()
  let bound = ceiling
  const start = detectedWeight(task, chosen)
  const patternsOf = (list: readonly number[]): Uint32Array => {
    const units = new Set(list.map((column) => problem.unitOfColumn[column]))
    return rules.unitPatterns
      .filter(
        (pattern) => settled.task.rules.kept[rules.unitOf[pattern]] === 1 || units.has(rules.unitOf[pattern]),
      )
      .sort()
  }
  const isOpen = detectedWeight(task, patternsOf(columns)) < bound
  const isSmall = problem.nColumns > 0 && problem.rowStart[problem.nRows] <= mostDetections
  if (solveMip && isOpen && isSmall && goOn()) {
    const exact = solveExactly(problem, columns, free, settled.isFree, solveMip, goOn)
    columns = exact.columns
    if (settled.isWholeTask) bound = Math.min(bound, (problem.keptWeight + exact.bound) / problem.weightScale)
  }
  const patterns = patternsOf(columns)
  const weight = detectedWeight(task, patterns)
  if (weight <= start) {
    return {
      patterns: Uint32Array.from(chosen).sort(),
      weight: start,
      gained: 0,
      bound: Math.max(bound, start),
      proven: bound <= start,
    }
  }
  return { patterns, weight, gained: weight - start, bound: Math.max(bound, weight), proven: bound <= weight }
}

/** Returns the bound at one budget; smaller budgets on the way to it bring the multipliers near. */
function ceilingAt(task: ChoiceTask, budget: number, goOn: () => boolean): number | null {
  const steps = Float64Array.from({ length: 12 }, (_, at) => budget * 0.7 ** (11 - at))
  const ceiling = ceilingOf(task, steps, { effort: 6e8, onProgress: goOn })
  return ceiling === null ? null : ceiling.bounds[steps.length - 1]
}

/** Returns the task with every unit that pairs of `before` speak of settled: kept where it is chosen, not free where not. */
function withSettledPairs(
  task: ChoiceTask,
  chosen: ArrayLike<number>,
): {
  task: ChoiceTask
  isWholeTask: boolean
  isFree: (unit: number) => boolean
  columnsOf: (problem: DualProblem) => number[]
} {
  const { rules } = task
  const isChosen = new Uint8Array(rules.nUnits)
  for (let at = 0; at < chosen.length; at++) isChosen[rules.unitOf[chosen[at]]] = 1
  const isPaired = new Uint8Array(rules.nUnits)
  for (let unit = 0; unit < rules.nUnits; unit++) {
    for (let at = rules.predecessorStart[unit]; at < rules.predecessorStart[unit + 1]; at++) {
      isPaired[unit] = 1
      isPaired[rules.predecessors[at]] = 1
    }
  }
  const kept = rules.kept.map((one, unit) =>
    one === 1 || (isPaired[unit] === 1 && isChosen[unit] === 1) ? 1 : 0,
  )
  return {
    task: { ...task, rules: { ...rules, kept } },
    isWholeTask: !isPaired.includes(1),
    isFree: (unit) => isPaired[unit] === 0,
    columnsOf: ({ unitOfColumn }) =>
      [...unitOfColumn.keys()].filter((column) => isChosen[unitOfColumn[column]] === 1),
  }
}

/** Variables: first one for each column, whether it is taken, then one for each row, whether it counts. */
function solveExactly(
  problem: DualProblem,
  start: readonly number[],
  budget: number,
  isFree: (unit: number) => boolean,
  solveMip: MipSolver,
  goOn: () => boolean,
): { columns: number[]; bound: number } {
  const { nRows, nColumns, rowStart, rowItems, weight, need, cost, unitOfColumn } = problem
  const lines = new MipRows()
  const startValues = new Float64Array(nColumns + nRows)
  const worth = new Float64Array(nColumns + nRows)
  worth.set(weight, nColumns)
  for (const column of start) startValues[column] = 1
  for (let row = 0; row < nRows; row++) {
    const times = new Map<number, number>()
    for (let at = rowStart[row]; at < rowStart[row + 1]; at++)
      times.set(rowItems[at], (times.get(rowItems[at]) ?? 0) + 1)
    const covered = [...times].reduce((sum, [column, count]) => sum + count * startValues[column], 0)
    startValues[nColumns + row] = covered >= need[row] ? 1 : 0
    lines.add(
      [...times.keys(), nColumns + row],
      [...[...times.values()].map((count) => -count), need[row]],
      -Infinity,
      0,
    )
  }
  lines.add(cost.keys(), cost, -Infinity, budget)
  const { values, objective, bound, state } = solveMip(
    {
      goal: 'most',
      cost: worth,
      upper: Float64Array.from(startValues, (_, at) => (at >= nColumns || isFree(unitOfColumn[at]) ? 1 : 0)),
      // A row of need 1 counts wholly as soon as a column is taken; of more, only when it is whole.
      isWhole: Uint8Array.from(startValues, (_, at) => (at < nColumns || need[at - nColumns] > 1 ? 1 : 0)),
      ...lines.finish(),
    },
    goOn,
    startValues,
  )
  const columns = values === null ? [...start] : [...cost.keys()].filter((column) => values[column] > 0.5)
  // Weights are whole: a bound of the solver, which may be off by its tolerance, rounds down to a whole number.
  return {
    columns,
    bound: state === 'optimal' ? Math.round(objective) : Math.floor(bound + 1e-6 * Math.max(1, bound)),
  }
}
