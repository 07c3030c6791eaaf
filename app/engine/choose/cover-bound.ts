/** A covering problem: choose columns so that every row holds one, at the least cost. */
export type Cover = {
  readonly rows: readonly (readonly number[])[]
  /** By column; rows may name any of them. Whole numbers. */
  readonly cost: Float64Array
}

export type CoverBound = {
  /** No cover costs less. A whole number. */
  readonly lowerBound: number
  /** The best cover found, ascending. */
  readonly best: readonly number[]
  readonly bestCost: number
  /** By column: no cover that holds it costs less than this. */
  readonly boundWith: Float64Array
}

const SCALE = 2 ** 24
const MOST_TURNS = 2000
const PATIENCE = 25

/**
 * Bounds a covering problem from both sides: from below by the Lagrangian dual, whose multipliers are whole numbers in
 * units of 1 / 2^24 so that the bound is exact and may be rounded up to the next whole cost; from above by greedy covers
 * at reduced costs. `goOn` ends the search early with what it has.
 * SOURCE: Beasley 1990, "A Lagrangian heuristic for set-covering problems".
 */
export function boundCover({ rows, cost }: Cover, goOn: () => boolean): CoverBound {
  const columns: number[][] = Array.from(cost, () => [])
  for (const [row, list] of rows.entries()) for (const column of list) columns[column].push(row)
  const inUse = [...columns.keys()].filter((column) => columns[column].length > 0)
  const lambda = Float64Array.from(rows, (list) =>
    Math.floor(Math.min(...list.map((column) => (cost[column] * SCALE) / columns[column].length))),
  )
  const reduced = new Float64Array(cost.length)
  const cover = new Int32Array(rows.length)
  const highest = { bound: -Infinity, reduced: reduced.slice() }
  let best: number[] | null = null
  let bestCost = Infinity
  let length = 1
  let idle = 0

  for (let turn = 0; turn < MOST_TURNS; turn++) {
    let bound = 0
    for (const one of lambda) bound += one
    cover.fill(1)
    for (const column of inUse) {
      let value = cost[column] * SCALE
      for (const row of columns[column]) value -= lambda[row]
      reduced[column] = value
      if (value >= 0) continue
      bound += value
      for (const row of columns[column]) cover[row]--
    }
    const isBetter = bound > highest.bound
    if (isBetter) {
      idle = bound > highest.bound + SCALE / 256 ? 0 : idle + 1
      highest.bound = bound
      highest.reduced.set(reduced)
    } else idle++
    if (best === null || (isBetter && turn % 5 === 0) || turn % 25 === 0) {
      const found = greedyCover(rows, columns, inUse, cost, reduced)
      const foundCost = found.reduce((sum, column) => sum + cost[column], 0)
      if (foundCost < bestCost) {
        best = found
        bestCost = foundCost
      }
    }
    if (idle >= PATIENCE) {
      length /= 2
      idle = 0
    }
    if (Math.ceil(highest.bound / SCALE) >= bestCost || length < 1e-3 || !goOn()) break
    let norm = 0
    for (const missing of cover) norm += missing * missing
    if (norm === 0) break
    const step = (length * (1.05 * bestCost * SCALE - bound)) / norm
    for (let row = 0; row < lambda.length; row++)
      lambda[row] = Math.max(0, Math.round(lambda[row] + step * cover[row]))
  }
  return {
    lowerBound: Math.min(bestCost, Math.max(0, Math.ceil(highest.bound / SCALE))),
    best: (best ?? []).sort((a, b) => a - b),
    bestCost: best === null ? 0 : bestCost,
    boundWith: highest.reduced.map((value) => Math.ceil((highest.bound + Math.max(0, value)) / SCALE)),
  }
}

/** Returns a cover without a column too many, chosen by reduced cost per row that it adds. */
function greedyCover(
  rows: readonly (readonly number[])[],
  columns: readonly (readonly number[])[],
  inUse: readonly number[],
  cost: Float64Array,
  reduced: Float64Array,
): number[] {
  const times = new Int32Array(rows.length)
  const adds = new Int32Array(columns.length)
  for (const column of inUse) adds[column] = columns[column].length
  const chosen: number[] = []
  for (let left = rows.length; left > 0;) {
    let pick = -1
    let lowest = Infinity
    for (const column of inUse) {
      if (adds[column] === 0) continue
      const price = reduced[column] > 0 ? reduced[column] / adds[column] : reduced[column] * adds[column]
      if (price >= lowest) continue
      lowest = price
      pick = column
    }
    chosen.push(pick)
    for (const row of columns[pick]) {
      if (times[row]++ > 0) continue
      left--
      for (const column of rows[row]) adds[column]--
    }
  }
  return chosen
    .sort((a, b) => cost[b] - cost[a])
    .filter((column) => {
      if (columns[column].some((row) => times[row] === 1)) return true
      for (const row of columns[column]) times[row]--
      return false
    })
}
