import { createRandom } from '../source/random.ts'
import type { DualProblem } from './dual-problem.ts'

/** Tries without a gain after which the search ends, and how many columns each try takes out at once. */
const MOST_KICKS = 100
const KICK_SIZE = 3

/**
 * A choice of columns within a budget that gets better by swaps: a column goes and what then gains most per cost comes,
 * as long as that detects more; then some random columns go at once, and what that leads to stays unless it is worse.
 * The random numbers are seeded, so the same choice comes out every time.
 * SOURCE: iterated local search, Lourenço, Martin & Stützle 2003.
 */
export class SwapSearch {
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
    for (let row = 0; row < problem.nRows; row++) {
      if (problem.need[row] === 1) this.#addGain(row, problem.weight[row])
    }
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
      const kicked = Array.from({ length: Math.min(KICK_SIZE, usable.length) }, () =>
        usable.splice(random.below(usable.length), 1),
      ).flat()
      for (const column of kicked) {
        this.#release(column)
        this.#isUsable[column] = 0
      }
      this.#fill()
      for (const column of kicked) this.#isUsable[column] = 1
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
