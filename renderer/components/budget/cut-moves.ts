import { clamp } from '../../charts/plot-geometry.ts'

export type CutMove = {
  readonly cut: number
  readonly patterns: number
  /** Where Home and End lead. */
  readonly fewest: number
  readonly most: number
  /** Budgets and markers, ascending. */
  readonly stops: readonly number[]
}

type Key = { readonly key: string; readonly shiftKey: boolean }

/** Returns where a key puts the cut; null for a key that does not move it. */
export function cutAfterKey(
  { key, shiftKey }: Key,
  { cut, patterns, fewest, most, stops }: CutMove,
): number | null {
  const step = shiftKey ? 10 : 1
  const to = (next: number): number => clamp(next, 0, patterns)
  switch (key) {
    case 'ArrowLeft':
    case 'ArrowDown':
      return to(cut - step)
    case 'ArrowRight':
    case 'ArrowUp':
      return to(cut + step)
    case 'PageDown':
      return to(cut - 50)
    case 'PageUp':
      return to(cut + 50)
    case 'Home':
      return to(fewest)
    case 'End':
      return to(most)
    case '[':
      return to(stops.findLast((stop) => stop < cut) ?? cut)
    case ']':
      return to(stops.find((stop) => stop > cut) ?? cut)
    default:
      return null
  }
}

/** Returns the stop within so many pixels of a cut that is nearest, or the cut itself. */
export function snapped(
  cut: number,
  stops: readonly number[],
  pixelsAt: (cut: number) => number,
  within: number,
): number {
  const pixel = pixelsAt(cut)
  let best = cut
  let distance = within
  for (const stop of stops) {
    const away = Math.abs(pixelsAt(stop) - pixel)
    if (away <= distance) {
      best = stop
      distance = away
    }
  }
  return best
}

/** Returns the cut that was typed, such as "1,024"; null for what is no number of patterns. */
export function typedCut(text: string, patterns: number): number | null {
  const digits = text.replace(/[\s,.'\u202f\u00a0]/g, '')
  return /^\d{1,9}$/.test(digits) && Number(digits) <= patterns ? Number(digits) : null
}
