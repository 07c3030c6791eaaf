import { type NumberFormats, textOf } from '../../contract/format-number.ts'
import { counted, stopWords } from '../../contract/plan-words.ts'
import type { Stop } from '../../engine/choose/budget.ts'
import type { PlanResult } from '../../engine/choose/plan-result.ts'
import type { SampleBand } from '../../engine/choose/sample-band.ts'
import type { Chart } from '../report-document.ts'
import { PALETTE } from './palette.ts'
import { linearScale, type Scale, thinned, ticksOf } from './scale.ts'
import { element, label, line, path } from './svg.ts'

const WIDTH = 666
const HEIGHT = 316
const PLOT = { left: 48, right: WIDTH - 4, top: 22, bottom: HEIGHT - 36 }

/**
 * Draws coverage against patterns applied: the order, the patterns as delivered, what is proven out of reach (hatched),
 * limit and goal, and the cut. White is what meets the goal within the limit.
 */
export function coverageChart(plan: PlanResult, formats: NumberFormats): Chart {
  const { budget, total } = plan
  const share = (weight: number): number => (total > 0 ? weight / total : 0)
  const curve = [0, ...plan.curve].map(share)
  const delivered = [0, ...plan.asDelivered.curve].map(share)
  const ceiling = plan.ceiling.length > 0 ? [share(plan.ceiling[0] ?? 0), ...plan.ceiling.map(share)] : []
  const goal = plan.goals.find(({ kind }) => kind === 'coverage')
  const goalCoverage = goal?.kind === 'coverage' ? goal.least : null
  const limitAt = plan.markers.find(({ name }) => name === 'limit')?.figures.patterns ?? null

  const last = lastShown(plan)
  const { low, high } = rangeShown(plan, Math.max(...curve, ...ceiling), goalCoverage)
  const x = linearScale(0, last, PLOT.left, PLOT.right)
  const y = linearScale(low, high, PLOT.bottom, PLOT.top)
  const inside = {
    right: limitAt === null ? PLOT.right : x(Math.min(limitAt, last)),
    bottom: goalCoverage === null ? PLOT.bottom : Math.min(PLOT.bottom, Math.max(PLOT.top, y(goalCoverage))),
  }
  const inPlot = { 'clip-path': 'url(#plot)' }
  const within = (points: readonly (readonly [number, number])[]): (readonly [number, number])[] =>
    points.map(([k, value]) => [x(k), y(value)])
  const pixels = PLOT.right - PLOT.left
  const parts = [
    definitions(),
    rectangle(PLOT.left, PLOT.top, PLOT.right, PLOT.bottom, PALETTE.chartGround),
    rectangle(PLOT.left, PLOT.top, inside.right, inside.bottom, PALETTE.surface),
    axes(x, y, formats),
  ]
  if (ceiling.length > 0) {
    const edge = within(thinned(ceiling, 0, last, pixels))
    parts.push(element('g', inPlot, hatching(edge, PLOT), path(edge, CEILING)))
  }
  if (plan.sample !== undefined && !plan.isWeighted) {
    parts.push(element('g', inPlot, bandArea(plan.sample, share, last, pixels, within)))
  }
  if (limitAt !== null && plan.limitStop !== null) {
    parts.push(limitLine(plan.limitStop, x(Math.min(limitAt, last)), formats))
  }
  if (goalCoverage !== null) parts.push(goalLine(y(goalCoverage), goalCoverage, formats))
  parts.push(
    element('g', inPlot, path(within(thinned(delivered, 0, last, pixels)), DELIVERED)),
    element('g', inPlot, path(within(thinned(curve, 0, last, pixels)), CHOSEN)),
  )
  if (plan.orderName !== 'as-delivered') {
    parts.push(
      nameAt(
        curve,
        last,
        budget.patterns,
        0.1,
        x,
        y,
        plan.orderName === 'steepest' ? 'Steepest first' : 'This order',
      ),
      nameAt(delivered, last, budget.patterns, 0.62, x, y, 'As delivered'),
    )
  }
  parts.push(cutLine(x(Math.min(budget.patterns, last)), y(budget.coverage), budget.patterns, formats))
  return {
    width: WIDTH,
    height: HEIGHT,
    label: `Coverage against patterns applied; the cut is at ${budget.patterns} patterns and ${textOf(formats.coverage(budget.coverage))}`,
    markup: parts.join(''),
  }
}

const CHOSEN = { stroke: PALETTE.series1, 'stroke-width': 2.2 }
const DELIVERED = { stroke: PALETTE.series2, 'stroke-width': 1.6, 'stroke-dasharray': '8 4' }
const CEILING = {
  stroke: PALETTE.text,
  'stroke-width': 1.2,
  'stroke-dasharray': '1 3',
  'stroke-linecap': 'round',
}
const LIMIT = { stroke: PALETTE.limit, 'stroke-width': 1.2 }

/** As far as the patterns as delivered need for what the budget detects, and a bit more. */
function lastShown({ order, markers, budget, asDelivered }: PlanResult): number {
  const all = markers.find(({ name }) => name === 'all')?.figures.patterns ?? 0
  const needed = Math.max(budget.patterns, all, asDelivered.sameDetected?.patterns ?? 0)
  return Math.max(1, Math.min(order.length, Math.ceil(needed * 1.08)))
}

/** The range in which goal, cut and the last of the curve fill the plot, not above 100 %. */
function rangeShown(
  { budget }: PlanResult,
  highest: number,
  goal: number | null,
): { low: number; high: number } {
  const lowest = Math.min(budget.coverage, goal ?? 1)
  const span = Math.min(1, Math.max(0.04, (highest - lowest) * 3))
  const high = Math.min(1, highest + span * 0.1)
  return { low: Math.max(0, high - span), high }
}

function definitions(): string {
  const { left, top, right, bottom } = PLOT
  return element(
    'defs',
    {},
    element('clipPath', { id: 'plot' }, rectangle(left, top, right, bottom, PALETTE.surface)),
  )
}

function rectangle(left: number, top: number, right: number, bottom: number, fill: string): string {
  return element('rect', {
    x: left,
    y: top,
    width: Math.max(0, right - left),
    height: Math.max(0, bottom - top),
    fill,
  })
}

/** Hatches all above an edge by lines of their own, which every renderer of SVG draws. */
function hatching(
  edge: readonly (readonly [number, number])[],
  { left, right, top, bottom }: typeof PLOT,
): string {
  const strokes: string[] = []
  const height = bottom - top
  for (let start = left - height; start < right; start += 7) {
    strokes.push(`M${start} ${bottom}L${start + height} ${top}`)
  }
  const outline = edge.map(([x, y], at) => `${at === 0 ? 'M' : 'L'}${x.toFixed(2)} ${y.toFixed(2)}`).join('')
  const area = `${outline}L${right} ${edge.at(-1)?.[1].toFixed(2) ?? top}L${right} ${top}L${left} ${top}Z`
  return [
    element('clipPath', { id: 'beyond' }, element('path', { d: area })),
    element(
      'g',
      { 'clip-path': 'url(#beyond)' },
      element('path', { d: strokes.join(''), stroke: PALETTE.hatch, 'stroke-width': 1, fill: 'none' }),
    ),
  ].join('')
}

/** Between what the curve of all faults lies where this one is of a sample. */
function bandArea(
  { low, high }: SampleBand,
  share: (weight: number) => number,
  last: number,
  pixels: number,
  within: (points: readonly (readonly [number, number])[]) => (readonly [number, number])[],
): string {
  const edge = (values: readonly number[]): (readonly [number, number])[] =>
    within(thinned([0, ...values].map(share), 0, last, pixels))
  const outline = [...edge(low), ...edge(high).reverse()]
  const d = `M${outline.map(([x, y]) => `${x.toFixed(2)} ${y.toFixed(2)}`).join('L')}Z`
  return element('path', { d, fill: PALETTE.series1, 'fill-opacity': 0.13 })
}

function axes(x: Scale, y: Scale, formats: NumberFormats): string {
  const { left, right, bottom } = PLOT
  const digits = y.to - y.from < 0.02 ? 1 : 0
  const rows = ticksOf(y, 5).map((value) => {
    const place = Math.round(y(value)) + 0.5
    const text = `${(value * 100).toFixed(Math.max(digits, decimalsOf(value * 100)))}\u00a0%`
    return line(left, place, right, place, { stroke: PALETTE.line }) + label(left - 7, place + 4, text, 'end')
  })
  const columns = ticksOf(x, 7).map((value) => {
    const place = Math.round(x(value)) + 0.5
    return (
      line(place, bottom, place, bottom + 4, { stroke: PALETTE.lineStrong }) +
      label(place, bottom + 17, formats.count(value).value, value === x.to ? 'end' : 'middle')
    )
  })
  return [
    ...rows,
    ...columns,
    line(left, bottom + 0.5, right, bottom + 0.5, { stroke: PALETTE.lineStrong }),
    label(right, bottom + 32, 'patterns applied', 'end', { fill: PALETTE.text3 }),
  ].join('')
}

function decimalsOf(value: number): number {
  return Number.isInteger(Number(value.toFixed(6)))
    ? 0
    : Number.isInteger(Number((value * 10).toFixed(6)))
      ? 1
      : 2
}

function limitLine(stop: Stop, place: number, formats: NumberFormats): string {
  const anchor = place > PLOT.right - 120 ? 'end' : 'start'
  return (
    line(place, PLOT.top, place, PLOT.bottom, LIMIT) +
    label(
      place + (anchor === 'end' ? -5 : 5),
      PLOT.top + 13,
      stopWords(stop, formats).replace('the limit of', 'limit'),
      anchor,
    )
  )
}

function goalLine(place: number, goal: number, formats: NumberFormats): string {
  if (place < PLOT.top || place > PLOT.bottom) return ''
  return (
    line(PLOT.left, place, PLOT.right, place, LIMIT) +
    label(PLOT.right - 6, place + 14, `goal ${textOf(formats.coverage(goal))}`, 'end')
  )
}

/** The name of a line, with a leader to the point at that share of the width, clear of the cut. */
function nameAt(
  curve: readonly number[],
  last: number,
  cut: number,
  share: number,
  x: Scale,
  y: Scale,
  name: string,
): string {
  let k = Math.max(1, Math.round(last * share))
  while (k < last && (curve[k] ?? 0) < y.from + (y.to - y.from) * 0.25) k++
  const room = 130
  if (x(k) < x(cut) && x(k) + room > x(cut)) k = Math.min(last, cut + Math.ceil((last - cut) * 0.12))
  const [px, py] = [x(k), Math.min(PLOT.bottom - 34, y(curve[k] ?? 0))]
  const anchor = px + room > PLOT.right ? 'end' : 'start'
  const along = anchor === 'end' ? -22 : 22
  return (
    line(px + along * 0.12, py + 4, px + along * 0.9, py + 20, {
      stroke: PALETTE.text3,
      'stroke-width': 0.8,
    }) + label(px + along, py + 28, name, anchor, { 'font-size': 12, fill: PALETTE.text })
  )
}

function cutLine(x: number, y: number, patterns: number, formats: NumberFormats): string {
  const anchor = x < PLOT.left + 70 ? 'start' : x > PLOT.right - 60 ? 'end' : 'middle'
  const words = counted(patterns, 'pattern', formats)
  const ring = { stroke: PALETTE.cut, 'stroke-width': 2.2, fill: PALETTE.surface }
  return [
    line(x, PLOT.top - 2, x, PLOT.bottom + 4, { stroke: PALETTE.cut, 'stroke-width': 2 }),
    element('circle', { cx: x, cy: Math.min(PLOT.bottom, Math.max(PLOT.top, y)), r: 4.5, ...ring }),
    label(x, PLOT.top - 8, words, anchor, { 'font-size': 12, 'font-weight': 'bold', fill: PALETTE.cutText }),
  ].join('')
}
