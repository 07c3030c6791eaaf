import { boundCover, type CoverBound } from './cover-bound.ts'
import type { ChoiceProgress, ChoiceTask } from './choice-task.ts'
import { buildDualProblem, type DualProblem } from './dual-problem.ts'
import { MipRows, type MipSolver } from './mip.ts'
import { reduceCover } from './reduce-cover.ts'
import { steepestFirst } from './steepest-first.ts'
import { UnitSequence } from './unit-sequence.ts'

export type SmallestSet = {
  /** In file order. */
  readonly patterns: Uint32Array
  readonly cost: number
  /** No set that keeps all detections and respects the rules costs less. */
  readonly lowerBound: number
  /** True where set and bound meet. */
  readonly proven: boolean
}

export type SmallestSetOptions = {
  /** False ends the search with the best so far: a time limit and a cancel both come this way. */
  readonly onProgress?: ChoiceProgress
  readonly solveMip?: MipSolver
}

/**
 * Returns the cheapest set found that detects every fault that the whole set detects (without what is left out), and a
 * bound that no such set can undercut. Costs of 1 count patterns; costs are whole numbers. Reductions first, then bounds
 * from the Lagrangian dual, then, where these do not meet, the solver that is handed in.
 * Pairs of `before` do not enter the bound, which stays valid; the set found takes along what has to run before.
 * Throws RangeError for a task of more than one detection, where a complete set is a different question.
 */
export function smallestCompleteSet(task: ChoiceTask, options: SmallestSetOptions = {}): SmallestSet | null {
  if (task.detections !== 1)
    throw new RangeError('a smallest complete set is for one detection of each fault')
  const { onProgress = () => true, solveMip } = options
  const everyFault = { ...task, weights: new Float64Array(task.matrix.nRows).fill(1) }
  let done = 0
  const goOn = (): boolean => onProgress(Math.min(done++, 1000), 1000)

  const greedy = steepestFirst(everyFault, goOn)
  if (greedy === null) return null
  const problem = buildDualProblem(everyFault, goOn)
  if (problem === null) return null
  const finish = (units: Iterable<number>, lowerBound: number): SmallestSet => {
    const patterns = patternsWith(task, units)
    const cost = patterns.reduce((sum, pattern) => sum + task.costs[pattern], 0)
    const bound = problem.keptCost + lowerBound
    return { patterns, cost, lowerBound: bound, proven: bound === cost }
  }
  const greedyUnits = new Set(
    Array.from(greedy.sequence.subarray(0, greedy.chosen), (pattern) => task.rules.unitOf[pattern]),
  )
  const unitsOf = (columns: readonly number[]): number[] =>
    columns.map((column) => problem.unitOfColumn[column])

  const core = reduceCover(problem, goOn)
  if (core === null) return finish(greedyUnits, 0)
  const chosenCost = core.chosen.reduce((sum, column) => sum + problem.cost[column], 0)
  if (core.rows.length === 0) return finish(unitsOf(core.chosen), chosenCost)
  const bound = boundCover({ rows: core.rows, cost: problem.cost }, goOn)
  const improved =
    bound.lowerBound < bound.bestCost && solveMip
      ? solveCore(core.rows, problem, bound, solveMip, goOn)
      : bound
  return finish(unitsOf([...core.chosen, ...improved.best]), chosenCost + improved.lowerBound)
}

/** Hands what is left to the solver, without the columns that no better cover can hold. */
function solveCore(
  rows: readonly (readonly number[])[],
  { cost }: DualProblem,
  bound: CoverBound,
  solveMip: MipSolver,
  goOn: () => boolean,
): Pick<CoverBound, 'best' | 'lowerBound'> {
  const isInBest = new Set(bound.best)
  const columns = [...new Set(rows.flat())]
    .filter((column) => isInBest.has(column) || bound.boundWith[column] < bound.bestCost)
    .sort((a, b) => a - b)
  const variableOf = new Map(columns.map((column, at) => [column, at]))
  const lines = new MipRows()
  for (const list of rows) {
    const items = list.map((column) => variableOf.get(column)).filter((variable) => variable !== undefined)
    lines.add(items, 1, 1, Infinity)
  }
  const model = {
    goal: 'least',
    cost: Float64Array.from(columns, (column) => cost[column]),
    upper: new Float64Array(columns.length).fill(1),
    isWhole: new Uint8Array(columns.length).fill(1),
    ...lines.finish(),
  } as const
  const start = Float64Array.from(columns, (column) => (isInBest.has(column) ? 1 : 0))
  const { values, objective, bound: solverBound, state } = solveMip(model, goOn, start)
  const found =
    values === null || objective > bound.bestCost - 0.5 ? null : columns.filter((_, at) => values[at] > 0.5)
  const bestCost = found === null ? bound.bestCost : Math.round(objective)
  // Costs are whole: a bound of the solver, which may be off by its tolerance, rounds up to the next whole number.
  const lowerBound =
    state === 'optimal' ? bestCost : Math.max(bound.lowerBound, Math.ceil(solverBound - 1e-6))
  return { best: found ?? bound.best, lowerBound: Math.min(bestCost, lowerBound) }
}

/** Returns the patterns of these units and of all that are kept or have to run before, in file order. */
function patternsWith({ rules }: ChoiceTask, units: Iterable<number>): Uint32Array {
  const sequence = new UnitSequence(rules)
  for (let unit = 0; unit < rules.nUnits; unit++)
    if (rules.kept[unit] === 1) sequence.placeWithPredecessors(unit)
  for (const unit of units) sequence.placeWithPredecessors(unit)
  return sequence.patterns().sort()
}
