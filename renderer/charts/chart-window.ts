import { clamp, type Span, type Window } from './plot-geometry.ts'
import { valueBetween } from './column-search.ts'

/** What is in view, apart from the unit of the axis: from which pattern to which, from which coverage to which. */
export type ChartPlace = { readonly patterns: Span; readonly coverage: Span }

/** Zooming in ends here. */
const FEWEST_PATTERNS = 12
const LEAST_COVERAGE = 0.0002

/** Returns the whole width, and of the height the part where choices differ: goal, ceiling and the last 3 to 4 %. */
export function defaultPlace(patterns: number, highest: number, goal: number | null): ChartPlace {
  const reached = clamp(highest, 0, 1)
  const low = Math.max(0, Math.min(reached - 0.035, goal === null ? 1 : goal - 0.02))
  const top = Math.max(reached, Math.min(goal ?? 0, 1))
  const high = Math.min(top + 0.09 * (top - low), 1 + 0.03 * (1 - low))
  return { patterns: { from: 0, to: Math.max(patterns, 1) }, coverage: { from: low, to: high } }
}

/** Everything from no pattern to all and from 0 to 100 %. */
export function wholePlace(patterns: number): ChartPlace {
  return { patterns: { from: 0, to: Math.max(patterns, 1) }, coverage: { from: 0, to: 1.02 } }
}

/** Returns the same part in an axis's own values. */
export function windowOf({ patterns, coverage }: ChartPlace, xs: Float64Array): Window {
  const from = valueBetween(xs, patterns.from)
  const to = valueBetween(xs, patterns.to)
  return { x: { from, to: to > from ? to : from + 1 }, y: coverage }
}

export function zoomPatterns(place: ChartPlace, factor: number, around: number, all: number): ChartPlace {
  return {
    ...place,
    patterns: zoomSpan(place.patterns, factor, around, { from: 0, to: all }, FEWEST_PATTERNS),
  }
}

export function zoomCoverage(place: ChartPlace, factor: number, around: number): ChartPlace {
  return {
    ...place,
    coverage: zoomSpan(place.coverage, factor, around, { from: 0, to: 1.02 }, LEAST_COVERAGE),
  }
}

/** Moves a span without changing its width, as far as what there is reaches. */
export function moveSpan(span: Span, by: number, all: Span): Span {
  const shift = clamp(by, all.from - span.from, all.to - span.to)
  return { from: span.from + shift, to: span.to + shift }
}

/** Moves one edge of a span, as far as the other edge and what there is allow. */
export function moveEdge(span: Span, edge: 'from' | 'to', by: number, all: Span): Span {
  const least = Math.min(FEWEST_PATTERNS, all.to - all.from)
  return edge === 'from'
    ? { ...span, from: clamp(span.from + by, all.from, span.to - least) }
    : { ...span, to: clamp(span.to + by, span.from + least, all.to) }
}

function zoomSpan(span: Span, factor: number, around: number, all: Span, least: number): Span {
  const most = all.to - all.from
  const width = clamp((span.to - span.from) * factor, Math.min(least, most), most)
  const share = (clamp(around, span.from, span.to) - span.from) / (span.to - span.from)
  const from = clamp(around - share * width, all.from, all.to - width)
  return { from, to: from + width }
}
