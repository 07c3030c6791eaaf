import { firstAtLeast } from './column-search.ts'
import type { Curve } from './coverage-option.ts'
import { type Plot, type Window, xPixel, yPixel } from './plot-geometry.ts'

export type Box = {
  readonly left: number
  readonly top: number
  readonly right: number
  readonly bottom: number
}

/** A name with the point of its line that it belongs to. */
export type LineLabel = {
  readonly name: Curve['name']
  readonly text: string
  readonly at: { readonly x: number; readonly y: number }
  readonly line: { readonly x: number; readonly y: number }
}

const HEIGHTS = [0.16, 0.3, 0.45, 0.6, 0.08, 0.75]
const AWAY = { x: 26, y: 28 }
const LETTER = 6.6

/** Returns where the names of curves stand: below the curve at the right, clear of the edges and of each other. */
export function lineLabels(
  curves: readonly (Curve & { readonly label: string })[],
  { window, plot, total, taken }: { window: Window; plot: Plot; total: number; taken: readonly Box[] },
): LineLabel[] {
  const boxes = [...taken]
  const labels: LineLabel[] = []
  for (const { name, xs, ys, label } of curves) {
    for (const height of HEIGHTS) {
      const coverage = window.y.from + height * (window.y.to - window.y.from)
      const index = firstAtLeast(ys, coverage * total)
      const along = xs[index]
      if (along === undefined || along < window.x.from || along > window.x.to) continue
      const line = { x: xPixel(along, window, plot), y: yPixel(coverage, window, plot) }
      const at = { x: line.x + AWAY.x, y: Math.min(line.y + AWAY.y, plot.bottom - 14) }
      const box = { left: at.x, right: at.x + LETTER * label.length, top: at.y - 12, bottom: at.y + 5 }
      if (box.right > plot.right - 4 || boxes.some((other) => overlap(box, other))) continue
      boxes.push(box)
      labels.push({ name, text: label, at, line })
      break
    }
  }
  return labels
}

function overlap(one: Box, other: Box): boolean {
  return one.left < other.right && other.left < one.right && one.top < other.bottom && other.top < one.bottom
}
