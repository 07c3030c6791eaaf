import { ceilingOf } from './ceiling.ts'
import type { ChoiceProgress, ChoiceTask } from './choice-task.ts'
import { detectedWeight } from './detected-weight.ts'
import { buildDualProblem, type DualProblem } from './dual-problem.ts'
import { createRandom } from '../source/random.ts'
import { MipRows, type MipSolver } from './mip.ts'

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

  const swaps = new SwapSearch(problem, settled.columnsOf(problem), budget - problem.keptCost, settled.isFree)
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
    const exact = solveExactly(problem, columns, budget - problem.keptCost, settled.isFree, solveMip, goOn)
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

/** Tries without a gain after which the search ends, and how many columns each try takes out at once. */
const MOST_KICKS = 100
const KICK_SIZE = 3

class SwapSearch {
  readonly #problem: DualProblem
  readonly #budget: number
  readonly #isUsable: Uint8Array
  readonly #isTaken: Uint8Array
  /** How many detections each row still lacks; 0 or below where it counts. */
  readonly #lacks: Int32Array
  /** Per column: the weight of the rows that lack just one detection. */
  readonly #gain: Float64Array
  #spent = 0
  #weight = 0

  constructor(
    problem: DualProblem,
    start: readonly number[],
    budget: number,
    isFree: (unit: number) => boolean,
  ) {
    this.#problem = problem
    this.#budget = budget
    this.#isUsable = Uint8Array.from(problem.unitOfColumn, (unit) => (isFree(unit) ? 1 : 0))
    this.#isTaken = new Uint8Array(problem.nColumns)
    this.#lacks = Int32Array.from(problem.need)
    this.#gain = new Float64Array(problem.nColumns)
    for (let row = 0; row < problem.nRows; row++)
      if (problem.need[row] === 1) this.#addGain(row, problem.weight[row])
    for (const column of start) this.#take(column)
    this.#fill()
  }

  chosen(): number[] {
    return [...this.#isTaken.keys()].filter((column) => this.#isTaken[column] === 1)
  }

  /** Searches until the weight meets `most`, or nothing was gained for as many tries as MOST_KICKS. */
  improve(most: number, goOn: () => boolean): void {
    const random = createRandom(1)
    this.#swapAll(goOn)
    let best = this.chosen()
    let bestWeight = this.#weight
    for (let kick = 0; kick < MOST_KICKS && bestWeight < most && goOn(); kick++) {
      const usable = best.filter((column) => this.#isUsable[column] === 1)
      if (usable.length === 0) return
      for (let at = 0; at < Math.min(KICK_SIZE, usable.length); at++) {
        const other = at + random.below(usable.length - at)
        const column = usable[other]
        usable[other] = usable[at]
        this.#release(column)
        this.#isUsable[column] = 0
        usable[at] = column
      }
      this.#fill()
      for (let at = 0; at < Math.min(KICK_SIZE, usable.length); at++) this.#isUsable[usable[at]] = 1
      this.#fill()
      this.#swapAll(goOn)
      if (this.#weight > bestWeight) kick = 0
      if (this.#weight >= bestWeight) {
        bestWeight = this.#weight
        best = this.chosen()
      } else this.#become(best)
    }
  }

  #become(columns: readonly number[]): void {
    const isWanted = new Set(columns)
    for (const column of this.chosen()) if (!isWanted.has(column)) this.#release(column)
    for (const column of columns) if (this.#isTaken[column] === 0) this.#take(column)
  }

  /** Swaps one column at a time for what then gains most, until no swap gains. */
  #swapAll(goOn: () => boolean): void {
    for (let isImproved = true; isImproved;) {
      isImproved = false
      for (const column of this.chosen()) {
        if (this.#isUsable[column] === 0) continue
        if (!goOn()) return
        const before = this.#weight
        this.#release(column)
        const added = this.#fill()
        if (this.#weight > before) {
          isImproved = true
          continue
        }
        for (const one of added) this.#release(one)
        this.#take(column)
      }
    }
  }

  /** Takes what gains most per cost while it fits, and returns it. */
  #fill(): number[] {
    const { nColumns, cost } = this.#problem
    const gain = this.#gain
    const added: number[] = []
    for (;;) {
      let best = -1
      for (let column = 0; column < nColumns; column++) {
        if (gain[column] <= 0 || this.#isTaken[column] === 1 || this.#isUsable[column] === 0) continue
        if (this.#spent + cost[column] > this.#budget) continue
        if (best < 0 || gain[column] * cost[best] > gain[best] * cost[column]) best = column
      }
      if (best < 0) return added
      this.#take(best)
      added.push(best)
    }
  }

  #take(column: number): void {
    this.#isTaken[column] = 1
    this.#spent += this.#problem.cost[column]
    this.#change(column, -1)
  }

  #release(column: number): void {
    this.#isTaken[column] = 0
    this.#spent -= this.#problem.cost[column]
    this.#change(column, 1)
  }

  #change(column: number, by: 1 | -1): void {
    const { columnAt, columnEnd, columnItems, weight } = this.#problem
    for (let at = columnAt[column]; at < columnEnd[column]; at++) {
      const row = columnItems[at]
      const before = this.#lacks[row]
      const after = before + by
      this.#lacks[row] = after
      if (before === 1) this.#addGain(row, -weight[row])
      if (after === 1) this.#addGain(row, weight[row])
      if (before > 0 && after <= 0) this.#weight += weight[row]
      if (before <= 0 && after > 0) this.#weight -= weight[row]
    }
  }

  #addGain(row: number, amount: number): void {
    const { rowStart, rowItems } = this.#problem
    for (let at = rowStart[row]; at < rowStart[row + 1]; at++) this.#gain[rowItems[at]] += amount
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
      cost: Float64Array.of(...new Float64Array(nColumns), ...weight),
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
