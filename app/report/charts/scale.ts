/** A linear scale from values to places. */
export type Scale = {
  readonly from: number
  readonly to: number
  (value: number): number
}

export function linearScale(from: number, to: number, start: number, end: number): Scale {
  const span = to > from ? to - from : 1
  return Object.assign((value: number) => start + ((value - from) / span) * (end - start), { from, to })
}

/** Returns 1, 2 or 5 × 10ⁿ steps within from … to, about `wanted` of them. */
export function ticksOf({ from, to }: Scale, wanted: number): number[] {
  const raw = (to - from) / wanted
  if (!(raw > 0)) return [from]
  const power = 10 ** Math.floor(Math.log10(raw))
  const step =
    [1, 2, 5, 10].map((factor) => factor * power).find((candidate) => candidate >= raw) ?? 10 * power
  const first = Math.ceil(from / step - 1e-9)
  const last = Math.floor(to / step + 1e-9)
  return Array.from({ length: last - first + 1 }, (_, at) => Number(((first + at) * step).toPrecision(12)))
}

/**
 * Returns the points of a curve over the prefixes from … to, at most about `pixels` × 2 of them: where more prefixes
 * fall on a pixel, its lowest and highest stay.
 */
export function thinned(
  values: ArrayLike<number>,
  from: number,
  to: number,
  pixels: number,
): (readonly [number, number])[] {
  const points: (readonly [number, number])[] = []
  const perPixel = Math.max(1, Math.ceil((to - from + 1) / pixels))
  for (let start = from; start <= to; start += perPixel) {
    const end = Math.min(to, start + perPixel - 1)
    let lowest = start
    let highest = start
    for (let k = start; k <= end; k++) {
      if ((values[k] ?? 0) < (values[lowest] ?? 0)) lowest = k
      if ((values[k] ?? 0) > (values[highest] ?? 0)) highest = k
    }
    for (const k of new Set([Math.min(lowest, highest), Math.max(lowest, highest), end])) {
      points.push([k, values[k] ?? 0])
    }
  }
  return points
}
