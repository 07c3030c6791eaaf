import { type NumberFormats, textOf } from '../../contract/format-number.ts'
import type { PricedOrder } from '../../engine/choose/price.ts'
import type { Chart } from '../report-document.ts'
import { PALETTE } from './palette.ts'
import { linearScale, thinned, ticksOf } from './scale.ts'
import { element, label, line, path } from './svg.ts'

const WIDTH = 666
const HEIGHT = 196
const PLOT = { left: 62, right: WIDTH - 96, top: 22, bottom: HEIGHT - 36 }

type MoneyCurves = Pick<PricedOrder, 'testCostPerYear' | 'escapeCostPerYear' | 'totalPerYear'>

/**
 * Draws a year's cost of test, cost of escapes and their sum against patterns applied, with the cut and the least sum.
 * Null where a year is not worked out. `chosen` is the last pattern with a gain.
 */
export function moneyChart(
  curves: MoneyCurves,
  cut: number,
  cheapest: number,
  chosen: number,
  currency: string,
  formats: NumberFormats,
): Chart | null {
  const { testCostPerYear, escapeCostPerYear, totalPerYear } = curves
  if (testCostPerYear === null || escapeCostPerYear === null || totalPerYear === null) return null
  const last = Math.max(1, chosen)
  const least = totalPerYear[cheapest] ?? 0
  const atCut = totalPerYear[cut] ?? 0
  // The first patterns let nearly all defects through: their sums would press the rest flat.
  const high = Math.min(Math.max(...totalPerYear.subarray(0, last + 1)), Math.max(3 * least, 1.3 * atCut))
  const x = linearScale(0, last, PLOT.left, PLOT.right)
  const y = linearScale(0, high > 0 ? high * 1.05 : 1, PLOT.bottom, PLOT.top)
  const money = (sum: number): string => textOf(formats.money(sum, currency))
  const drawn = (values: Float64Array, attributes: Record<string, string | number>): string =>
    path(
      thinned(values, 0, last, PLOT.right - PLOT.left).map(([k, value]) => [x(k), y(value)] as const),
      attributes,
    )
  const ends = spread([
    { name: 'sum', place: y(totalPerYear[last] ?? 0) },
    { name: 'cost of test', place: y(testCostPerYear[last] ?? 0) },
    { name: 'cost of escapes', place: y(escapeCostPerYear[last] ?? 0) },
  ])
  const { left, right, top, bottom } = PLOT
  const markup = [
    element(
      'clipPath',
      { id: 'money' },
      element('rect', { x: left, y: top, width: right - left, height: bottom - top }),
    ),
    ...ticksOf(y, 4).map((value) => {
      const place = Math.round(y(value)) + 0.5
      return (
        line(left, place, right, place, { stroke: PALETTE.line }) +
        label(left - 7, place + 4, money(value), 'end')
      )
    }),
    ...ticksOf(x, 7).map((value) => {
      const place = Math.round(x(value)) + 0.5
      return (
        line(place, bottom, place, bottom + 4, { stroke: PALETTE.lineStrong }) +
        label(place, bottom + 17, formats.count(value).value, 'middle')
      )
    }),
    line(left, bottom + 0.5, right, bottom + 0.5, { stroke: PALETTE.lineStrong }),
    label(right, bottom + 32, 'patterns applied', 'end', { fill: PALETTE.text3 }),
    element(
      'g',
      { 'clip-path': 'url(#money)' },
      drawn(escapeCostPerYear, { stroke: PALETTE.series3, 'stroke-width': 1.8, 'stroke-dasharray': '2 3' }),
      drawn(testCostPerYear, {
        stroke: PALETTE.series4,
        'stroke-width': 1.8,
        'stroke-dasharray': '10 3 2 3',
      }),
      drawn(totalPerYear, { stroke: PALETTE.series1, 'stroke-width': 2.2 }),
    ),
    ...ends.map(({ name, place }) =>
      label(right + 7, place + 4, name, 'start', { 'font-size': 12, fill: PALETTE.text }),
    ),
    line(x(cut), top - 2, x(cut), bottom + 4, { stroke: PALETTE.cut, 'stroke-width': 2 }),
    label(
      x(cut),
      top - 8,
      cut === cheapest ? `this budget, the least: ${money(least)}` : 'this budget',
      x(cut) > right - 40 ? 'end' : 'middle',
      {
        'font-size': 12,
        'font-weight': 'bold',
        fill: PALETTE.cutText,
      },
    ),
    element('circle', {
      cx: x(cheapest),
      cy: y(least),
      r: 4,
      fill: PALETTE.surface,
      stroke: PALETTE.text,
      'stroke-width': 1.6,
    }),
    cut === cheapest
      ? ''
      : label(
          x(cheapest),
          y(least) - 10,
          `least: ${money(least)}`,
          x(cheapest) > right - 60 ? 'end' : 'middle',
          {
            fill: PALETTE.text,
          },
        ),
  ].join('')
  return {
    width: WIDTH,
    height: HEIGHT,
    label: `Costs a year against patterns; least ${money(least)} at ${cheapest}`,
    markup,
  }
}

type EndLabel = { readonly name: string; readonly place: number }

/** Moves labels at the lines' ends apart so that none covers another. */
function spread(labels: readonly EndLabel[]): readonly EndLabel[] {
  const sorted = [...labels].sort((a, b) => a.place - b.place)
  let before = -Infinity
  const moved = sorted.map(({ name, place }) => {
    before = Math.max(place, before + 15)
    return { name, place: before }
  })
  const over = Math.max(0, (moved.at(-1)?.place ?? 0) - PLOT.bottom)
  return moved.map(({ name, place }) => ({ name, place: place - over }))
}
