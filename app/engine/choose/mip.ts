/** A linear program over variables 0 … upper, some of them whole. Rows in CSR form. */
export type MipModel = {
  readonly goal: 'least' | 'most'
  /** Length nVariables. */
  readonly cost: Float64Array
  readonly upper: Float64Array
  /** 1 where the variable has to be whole. */
  readonly isWhole: Uint8Array
  readonly rowStart: Int32Array
  readonly rowItems: Int32Array
  readonly rowValues: Float64Array
  /** Length nRows; ±Infinity where a row has no limit. */
  readonly rowLower: Float64Array
  readonly rowUpper: Float64Array
}

export type MipResult = {
  /** 'stopped': the time was over or `goOn` said no; values and bound are the best so far. */
  readonly state: 'optimal' | 'infeasible' | 'stopped'
  /** Null where no solution was found. */
  readonly values: Float64Array | null
  readonly objective: number
  /** No solution is better than this. */
  readonly bound: number
}

/**
 * A solver of mixed-integer linear programs, handed in from outside. It asks `goOn` often enough to stop within a fifth of
 * a second, and starts from `start`, a solution, where one is given.
 */
export type MipSolver = (model: MipModel, goOn: () => boolean, start?: Float64Array) => MipResult

/** Collects the rows of a model. */
export class MipRows {
  readonly #items: number[] = []
  readonly #values: number[] = []
  readonly #start: number[] = [0]
  readonly #lower: number[] = []
  readonly #upper: number[] = []

  /** Adds lower ≤ Σ values[i] × variable items[i] ≤ upper. */
  add(items: Iterable<number>, values: Iterable<number> | number, lower: number, upper: number): void {
    for (const item of items) this.#items.push(item)
    if (typeof values === 'number') while (this.#values.length < this.#items.length) this.#values.push(values)
    else for (const value of values) this.#values.push(value)
    this.#start.push(this.#items.length)
    this.#lower.push(lower)
    this.#upper.push(upper)
  }

  finish(): Pick<MipModel, 'rowStart' | 'rowItems' | 'rowValues' | 'rowLower' | 'rowUpper'> {
    return {
      rowStart: Int32Array.from(this.#start),
      rowItems: Int32Array.from(this.#items),
      rowValues: Float64Array.from(this.#values),
      rowLower: Float64Array.from(this.#lower),
      rowUpper: Float64Array.from(this.#upper),
    }
  }
}
