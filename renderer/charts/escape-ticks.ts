import { placeOf, valueBetween } from './column-search.ts'
import { niceTicks } from './nice-ticks.ts'
import type { Span } from './plot-geometry.ts'

export type EscapeTick = { readonly coverage: number; readonly dppm: number }

/**
 * Returns round escape rates and the coverage at which each stands: the height of the chart read as a second scale of
 * the same quantity. Both columns belong to one order; coverage does not descend along it, escapes do not ascend.
 */
export function escapeTicks(
  detected: Float64Array,
  dppm: Float64Array,
  total: number,
  view: Span,
  most: number,
): EscapeTick[] {
  const last = detected.length - 1
  const from = placeOf(detected, view.from * total)
  const high = valueBetween(dppm, from)
  const low = valueBetween(dppm, Math.min(placeOf(detected, view.to * total), last))
  const falling = dppm.map((value) => -value)
  return niceTicks(low, high, most)
    .map((tick) => ({ dppm: tick, coverage: valueBetween(detected, placeOf(falling, -tick)) / total }))
    .filter(({ coverage }) => coverage >= view.from && coverage <= view.to)
}
