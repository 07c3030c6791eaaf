import { firstAbove } from './column-search.ts'
import type { Span } from './plot-geometry.ts'

/** Steps are drawn from this width of a pattern; below, the lowest and the highest value of each pixel column. */
const STEP_PIXELS = 3
const LONG_STEP_PIXELS = 8

export type Point = [x: number, y: number]

/**
 * Returns the points of a step curve inside a window, ready to be joined by straight lines.
 *
 * `xs` is not descending, `ys` as long; both may hold 100,000 values: the work grows with what is in view and the result
 * with the width. One point before and one after the window are kept, so that the line runs to its edges.
 */
export function stepCurve(
  xs: Float64Array,
  ys: ArrayLike<number>,
  scale: number,
  span: Span,
  width: number,
): Point[] {
  const first = Math.max(0, firstAbove(xs, span.from) - 1)
  const last = Math.min(xs.length - 1, firstAbove(xs, span.to))
  const count = last - first + 1
  if (count <= 0 || width <= 0) return []
  return count * STEP_PIXELS <= width
    ? steps(xs, ys, scale, first, last, (span.to - span.from) / width)
    : extremes(xs, ys, scale, first, last, (span.to - span.from) / width)
}

function steps(
  xs: Float64Array,
  ys: ArrayLike<number>,
  scale: number,
  first: number,
  last: number,
  pixel: number,
): Point[] {
  const points: Point[] = [[xs[first] ?? 0, (ys[first] ?? 0) / scale]]
  for (let at = first + 1; at <= last; at++) {
    const x = xs[at] ?? 0
    const y = (ys[at] ?? 0) / scale
    const [beforeX, before] = points[points.length - 1] ?? [x, y]
    if (y === before && at < last) continue
    // ECharts leaves out points nearer than a pixel: without this one, a long step after a small gain would slope.
    if (x - beforeX > LONG_STEP_PIXELS * pixel) points.push([beforeX + 2 * pixel, before])
    if (y !== before) points.push([x, before])
    points.push([x, y])
  }
  return points
}

function extremes(
  xs: Float64Array,
  ys: ArrayLike<number>,
  scale: number,
  first: number,
  last: number,
  pixel: number,
): Point[] {
  const points: Point[] = []
  const start = xs[first] ?? 0
  let at = first
  while (at <= last) {
    const x = xs[at] ?? 0
    const end = start + (Math.floor((x - start) / pixel) + 1) * pixel
    let low = Infinity
    let high = -Infinity
    // A column of no width at all would never end: the first value is always taken.
    do {
      const y = (ys[at] ?? 0) / scale
      if (y < low) low = y
      if (y > high) high = y
      at++
    } while (at <= last && (xs[at] ?? 0) < end)
    // On level ground its end is enough, after two points of which ECharts may leave out the first.
    const before = points[points.length - 1]
    const isLevel = low === high && [1, 2, 3].every((back) => points[points.length - back]?.[1] === low)
    if (isLevel && before) before[0] = x
    else points.push([x, low])
    if (high !== low) points.push([x, high])
  }
  const lastX = xs[last] ?? 0
  const final = points[points.length - 1]
  if (final && final[0] !== lastX) points.push([lastX, final[1]])
  return points
}
