import type { DualProblem } from './dual-problem.ts'

/** What the caller of a descent wants next, after so many elementary steps. */
export type DescentAnswer = 'go on' | 'enough' | 'cancel'

/** How much of a new subgradient goes into the direction; the rest is the direction before. */
const FRESH_PART = 0.5

/** Elementary steps between two questions whether to go on: some milliseconds. */
const STEPS_BETWEEN_QUESTIONS = 4e6

/**
 * The dual of a choice at one set of multipliers λ, kept up to date as they change. All of `lambda`, `gain` and sums of
 * them are whole numbers up to 2^53 in units of 1 / scale, so additions are exact in any order.
 *
 * For 0 ≤ need_f λ_f ≤ w_f every choice that costs at most B detects at most
 * Σ_f (w_f − need_f λ_f) + max { Σ_p g_p y_p : Σ_p c_p y_p ≤ B, 0 ≤ y_p ≤ 1 },  g_p = Σ λ_f over the rows of column p.
 */
export class LagrangianDual {
  readonly problem: DualProblem
  readonly scale: number
  readonly totalWeight: number
  /** The multipliers of the lowest bound that the last descent met. */
  readonly best: Float64Array
  readonly #lambda: Float64Array
  readonly #cap: Float64Array
  readonly #gain: Float64Array
  /** Σ need_f λ_f. */
  #spread = 0
  /** How much of each column the relaxed choice takes, 0 … 1, and how often it covers each row. */
  readonly #share: Float64Array
  readonly #cover: Float64Array
  readonly #density: Float64Array
  readonly #direction: Float64Array
  #steps = 0
  #ask: (steps: number) => DescentAnswer = () => 'go on'
  #answer: DescentAnswer = 'go on'

  /** Starts at λ = w / need, the best multipliers for a budget of one unit where one detection is enough. */
  constructor(problem: DualProblem) {
    const { weight, need, nRows, nColumns, rowStart } = problem
    this.problem = problem
    this.totalWeight = weight.reduce((sum, one) => sum + one, 0)
    // The largest sum there can be: all gains together, where every multiplier is at its cap.
    const largest = weight.reduce((sum, one, row) => sum + one * (1 + rowStart[row + 1] - rowStart[row]), 2)
    this.scale = 2 ** Math.max(0, Math.min(20, 52 - Math.ceil(Math.log2(largest))))
    this.#cap = weight.map((one, row) => Math.floor((one * this.scale) / need[row]))
    this.best = this.#cap.slice()
    this.#lambda = new Float64Array(nRows)
    this.#gain = new Float64Array(nColumns)
    this.#share = new Float64Array(nColumns)
    this.#cover = new Float64Array(nRows)
    this.#density = new Float64Array(nColumns)
    this.#direction = new Float64Array(nRows)
    this.#moveTo(this.best)
  }

  /**
   * Lowers the bound for one budget from the multipliers at hand by subgradient steps, until it meets `floor` (a weight
   * that a choice within the budget is known to detect), or steps gain nothing, or `ask` says enough. Ends at `best`.
   * False when `ask` said cancel. After `patience` turns without a clear gain it returns to `best` and aims half as far.
   * SOURCE: step length (bound − target) / |direction|², Held, Wolfe & Crowder 1974; directions that keep a part of the
   * last one, Crowder 1976; a target that comes nearer when it is not reached, Brännlund 1993.
   */
  descend(budget: number, floor: number, patience: number, ask: (steps: number) => DescentAnswer): boolean {
    this.#ask = ask
    this.#answer = 'go on'
    const { nRows, nColumns } = this.problem
    let lowest = Infinity
    let aim = Infinity
    let idle = 0
    let freshPart = 1
    for (;;) {
      this.#steps += 8 * nRows + 20 * nColumns
      const bound = this.#take(budget)
      if (aim === Infinity) aim = (bound - floor * this.scale) / 4
      idle = bound < lowest - aim / 2 ? 0 : idle + 1
      if (bound < lowest) {
        lowest = bound
        this.best.set(this.#lambda)
      }
      if (idle >= patience) {
        aim /= 2
        idle = 0
        freshPart = 1
        this.#moveTo(this.best)
        if (aim < this.scale / 16) return this.#finish()
        continue
      }
      const norm = this.#turn(freshPart)
      freshPart = FRESH_PART
      const isMet = Math.floor(lowest / this.scale) <= floor
      if (isMet || norm === 0 || !this.#mayGoOn()) return this.#finish()
      this.#step((bound - lowest + aim) / norm)
    }
  }

  #finish(): boolean {
    this.#moveTo(this.best)
    return this.#answer !== 'cancel'
  }

  /** Reports the steps since the last time and returns whether the search may go on. */
  #mayGoOn(): boolean {
    if (this.#answer === 'go on') this.#answer = this.#ask(this.#steps)
    this.#steps = 0
    return this.#answer === 'go on'
  }

  /** Returns the bound at the multipliers at hand for each budget, ascending; 0 for one below 0. */
  boundsFor(budgets: Float64Array): Float64Array {
    const { nColumns, cost } = this.problem
    const gain = this.#gain
    const densest = Uint32Array.from({ length: nColumns }, (_, column) => column)
    densest.sort((a, b) => gain[b] / cost[b] - gain[a] / cost[a])
    const outside = this.totalWeight * this.scale - this.#spread
    let taken = 0
    let spent = 0
    let sum = 0
    return budgets.map((budget) => {
      if (budget < 0) return 0
      while (taken < nColumns && spent + cost[densest[taken]] <= budget) {
        spent += cost[densest[taken]]
        sum += gain[densest[taken++]]
      }
      const left = taken < nColumns ? partOf(gain[densest[taken]], cost[densest[taken]], budget - spent) : 0
      return outside + sum + left
    })
  }

  /** Takes the columns that are densest in gain, as the budget lets, and returns the bound that this makes. */
  #take(budget: number): number {
    const { nColumns, cost } = this.problem
    const gain = this.#gain
    const density = this.#density
    for (let column = 0; column < nColumns; column++) density[column] = gain[column] / cost[column]
    const sorted = density.slice().sort()
    let low = 0
    let high = nColumns
    while (low < high) {
      const middle = (low + high) >> 1
      if (this.#costFrom(sorted[middle]) <= budget) high = middle
      else low = middle + 1
    }
    const whole = low < nColumns ? sorted[low] : Infinity
    let left = budget
    let sum = 0
    for (let column = 0; column < nColumns; column++) {
      const isTaken = density[column] >= whole
      this.#setShare(column, isTaken ? 1 : 0)
      if (!isTaken) continue
      left -= cost[column]
      sum += gain[column]
    }
    const partial = low > 0 ? sorted[low - 1] : 0
    for (let column = 0; column < nColumns && left > 0 && partial > 0; column++) {
      if (density[column] !== partial) continue
      this.#setShare(column, Math.min(1, left / cost[column]))
      sum += left < cost[column] ? partOf(gain[column], cost[column], left) : gain[column]
      left -= Math.min(left, cost[column])
    }
    return this.totalWeight * this.scale - this.#spread + sum
  }

  #costFrom(threshold: number): number {
    const { nColumns, cost } = this.problem
    const density = this.#density
    let sum = 0
    for (let column = 0; column < nColumns; column++) if (density[column] >= threshold) sum += cost[column]
    return sum
  }

  #setShare(column: number, share: number): void {
    const change = share - this.#share[column]
    if (change === 0) return
    this.#share[column] = share
    const { columnAt, columnEnd, columnItems } = this.problem
    const cover = this.#cover
    const end = columnEnd[column]
    for (let at = columnAt[column]; at < end; at++) cover[columnItems[at]] += change
    this.#steps += end - columnAt[column]
  }

  /** Mixes the subgradient at hand into the direction, and returns the squared length of its part that is free to go. */
  #turn(freshPart: number): number {
    const { nRows, need } = this.problem
    const cover = this.#cover
    const direction = this.#direction
    let norm = 0
    for (let row = 0; row < nRows; row++) {
      const way = freshPart * (need[row] - cover[row]) + (1 - freshPart) * direction[row]
      direction[row] = way
      const lambda = this.#lambda[row]
      if ((way > 0 && lambda < this.#cap[row]) || (way < 0 && lambda > 0)) norm += way * way
    }
    return norm
  }

  #step(length: number): void {
    const { nRows } = this.problem
    for (let row = 0; row < nRows; row++) {
      const wanted = Math.round(this.#lambda[row] + length * this.#direction[row])
      this.#setMultiplier(row, Math.max(0, Math.min(this.#cap[row], wanted)))
      if (this.#steps > STEPS_BETWEEN_QUESTIONS && !this.#mayGoOn()) return
    }
  }

  #moveTo(lambda: Float64Array): void {
    for (let row = 0; row < lambda.length; row++) {
      this.#setMultiplier(row, lambda[row])
      if (this.#steps > STEPS_BETWEEN_QUESTIONS) this.#mayGoOn()
    }
  }

  #setMultiplier(row: number, value: number): void {
    const change = value - this.#lambda[row]
    if (change === 0) return
    this.#lambda[row] = value
    const { rowStart, rowItems, need } = this.problem
    const gain = this.#gain
    this.#spread += need[row] * change
    const end = rowStart[row + 1]
    for (let at = rowStart[row]; at < end; at++) gain[rowItems[at]] += change
    this.#steps += end - rowStart[row]
  }
}

/** Returns the gain of the part of a column that is left over for it, rounded up by more than divisions can lose. */
function partOf(gain: number, cost: number, left: number): number {
  return left <= 0 || gain <= 0 ? 0 : Math.min(gain, Math.ceil((left / cost) * gain) + 4)
}
