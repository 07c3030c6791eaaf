import type { CoverageCurve } from './order.ts'
import type { PricedOrder } from './price.ts'

/**
 * The most that a cut may take, inclusive. `milliseconds` are these patterns on one site, set-up included;
 * `deviceMilliseconds` the whole program's share per device.
 */
export type Limit = {
  readonly kind: 'patterns' | 'cycles' | 'milliseconds' | 'deviceMilliseconds'
  readonly most: number
}

/** What a cut must reach, inclusive: at least that coverage (0..1, by the curve's weights), at most that DPPM. */
export type Goal =
  { readonly kind: 'coverage'; readonly least: number } | { readonly kind: 'dppm'; readonly most: number }

/**
 * What stops an order from going on: a limit, the vector memory where reloads are forbidden, or patterns that a constraint
 * leaves out.
 */
export type Stop = Limit | { readonly kind: 'vectorMemory' } | { readonly kind: 'leftOut' }

/** An order, priced, and what is asked of a cut of it. */
export type CutRequest = {
  readonly curve: CoverageCurve
  readonly priced: PricedOrder
  /** How many patterns at the front were chosen for a gain; a cut goes no further. */
  readonly chosen: number
  /** Length nPatterns + 1: 1 where constraints let a cut lie, as cutPlaces says. */
  readonly mayCut: Uint8Array
  readonly limits: readonly Limit[]
  readonly goals: readonly Goal[]
}

export type Cut = {
  /** How many patterns of the order run. */
  readonly patterns: number
  /** What the next pattern would break; null where all patterns with a gain fit, or a goal ended the order first. */
  readonly stop: Stop | null
  /** A limit that this cut breaks already, since constraints allow no shorter one. */
  readonly broken: Stop | null
  /** Goals that this cut does not meet; then it is the shortest prefix that comes nearest to them within all limits. */
  readonly unmet: readonly UnmetGoal[]
}

export type UnmetGoal = {
  readonly goal: Goal
  /** The nearest that can be reached within all limits. */
  readonly nearest: number
  /** What stands in the way; null where the patterns themselves detect no more. */
  readonly stop: Stop | null
}

/** Relative slack for rounding, so that what takes exactly the limit fits. */
const SLACK = 1e-12

/**
 * Returns the cut of an order: without goals the longest prefix within all limits, with goals the shortest prefix that
 * meets them all within all limits.
 */
export function chooseCut(request: CutRequest): Cut {
  const { curve, priced, chosen, mayCut, limits, goals } = request
  const mayEnd = (k: number): boolean => mayCut[k] === 1
  const shortest = firstPrefix(chosen, mayEnd) ?? chosen
  const broken = stopAt(shortest, priced, limits)
  if (broken !== null) return { patterns: shortest, stop: broken, broken, unmet: [] }

  let longest = shortest
  let stop: Stop | null = null
  for (let k = shortest + 1; k <= chosen && stop === null; k++) {
    stop = stopAt(k, priced, limits)
    if (stop === null && mayEnd(k)) longest = k
  }
  if (goals.length === 0) return { patterns: longest, stop, broken, unmet: [] }

  const values = goals.map((goal) => goalColumn(goal, curve, priced))
  const reached = goals.map((goal, at) =>
    firstPrefix(longest, (k) => mayEnd(k) && meets(goal, values[at][k])),
  )
  const unmet = goals.flatMap((goal, at) => {
    if (reached[at] !== null) return []
    const isBeyond = firstPrefix(chosen, (k) => meets(goal, values[at][k])) !== null
    return [{ goal, nearest: values[at][longest], stop: isBeyond ? stop : null }]
  })
  if (unmet.length === 0) return { patterns: Math.max(...reached.map(Number)), stop: null, broken, unmet }
  const nearest = firstPrefix(
    longest,
    (k) => mayEnd(k) && values.every((column) => column[k] === column[longest]),
  )
  return { patterns: nearest ?? longest, stop, broken, unmet }
}

/** Returns what a prefix of k patterns breaks first, or null. */
export function stopAt(k: number, priced: PricedOrder, limits: readonly Limit[]): Stop | null {
  if (priced.isOverMemory[k] === 1) return { kind: 'vectorMemory' }
  return limits.find((limit) => usedOf(limit, k, priced) > limit.most * (1 + SLACK)) ?? null
}

/** Returns how much of a limit a prefix of k patterns takes. */
export function usedOf({ kind }: Limit, k: number, priced: PricedOrder): number {
  switch (kind) {
    case 'patterns':
      return k
    case 'cycles':
      return priced.cycles[k]
    case 'milliseconds':
      return priced.milliseconds[k]
    case 'deviceMilliseconds':
      return priced.perDeviceMilliseconds[k]
  }
}

function goalColumn(goal: Goal, { detected, total }: CoverageCurve, priced: PricedOrder): Float64Array {
  return goal.kind === 'dppm' ? priced.dppm : detected.map((weight) => (total > 0 ? weight / total : 0))
}

/** True where a value of the goal's kind, coverage or DPPM, meets it. */
export function meets(goal: Goal, value: number): boolean {
  return goal.kind === 'dppm' ? value <= goal.most * (1 + SLACK) : value >= goal.least * (1 - SLACK)
}

function firstPrefix(last: number, fits: (k: number) => boolean): number | null {
  for (let k = 0; k <= last; k++) if (fits(k)) return k
  return null
}
