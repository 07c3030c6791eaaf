import type { LineSeriesOption } from 'echarts/charts'
import { FONT } from '../tokens.ts'
import type { ChartColours, LineLook } from './chart-colours.ts'
import type { CoverageOption } from './coverage-option.ts'
import type { Plot, Size, Span, Window } from './plot-geometry.ts'
import { stepCurve } from './step-curve.ts'

export const COST_LINES = ['total', 'test', 'escapes'] as const

/** What a year costs: test, escapes, and both together. */
export type CostLine = (typeof COST_LINES)[number]

/** A cost a year at every number of patterns, length patterns + 1. */
export type CostCurves = Readonly<Record<CostLine, Float64Array>>

const MARGINS = { left: 78, right: 118, top: 24, bottom: 44 } as const

export function costPlot({ width, height }: Size): Plot {
  return {
    left: MARGINS.left,
    right: Math.max(MARGINS.left + 1, width - MARGINS.right),
    top: MARGINS.top,
    bottom: Math.max(MARGINS.top + 1, height - MARGINS.bottom),
  }
}

/** How far the picture goes on behind the last pattern with a gain, where sums rise again. */
const BEHIND = 1.15

/**
 * Returns the part of the curves to be seen: all patterns with a gain and some more, and sums up to three times the least.
 * The first patterns let nearly all defects through; their sums would press the rest flat.
 */
export function costWindow({ total }: CostCurves, chosen: number, cut: number): Window {
  const last = Math.max(1, Math.min(total.length - 1, Math.ceil(BEHIND * chosen)), cut)
  let [least, most] = [Infinity, 0]
  for (let k = 0; k <= last; k++) {
    least = Math.min(least, total[k] ?? Infinity)
    most = Math.max(most, total[k] ?? 0)
  }
  const high = Math.min(most, 3 * least)
  return { x: { from: 0, to: last }, y: { from: 0, to: high > 0 ? high * 1.05 : 1 } }
}

export function costLook(name: CostLine, { series }: ChartColours): LineLook {
  switch (name) {
    case 'total':
      return { colour: series[0], dash: [], width: 2.4 }
    case 'test':
      return { colour: series[3], dash: [10, 3, 2, 3], width: 2 }
    case 'escapes':
      return { colour: series[2], dash: [2, 3], width: 2 }
  }
}

/** Returns what ECharts draws: three curves over gridlines. The cut lies in a layer of its own above. */
export function costOption(
  curves: CostCurves,
  view: Window,
  size: Size,
  ticks: readonly number[],
  colours: ChartColours,
): CoverageOption {
  const plot = costPlot(size)
  const width = plot.right - plot.left
  return {
    animation: false,
    grid: {
      left: plot.left,
      top: plot.top,
      width,
      height: plot.bottom - plot.top,
      show: true,
      backgroundColor: colours.inside,
      borderWidth: 0,
    },
    xAxis: {
      type: 'value',
      min: view.x.from,
      max: view.x.to,
      splitLine: { show: false },
      axisLine: { lineStyle: { color: colours.lineStrong } },
      axisLabel: { show: false },
      axisTick: { show: false },
    },
    yAxis: {
      type: 'value',
      min: view.y.from,
      max: view.y.to,
      axisTick: { show: false, customValues: [...ticks] },
      axisLabel: { show: false, customValues: [...ticks], fontFamily: FONT },
      splitLine: { lineStyle: { color: colours.line, width: 1 } },
    },
    series: COST_LINES.map((name) => lineOf(name, curves[name], view.x, width, colours)),
  }
}

function lineOf(
  name: CostLine,
  values: Float64Array,
  span: Span,
  width: number,
  colours: ChartColours,
): LineSeriesOption {
  const { colour, dash, width: lineWidth } = costLook(name, colours)
  return {
    type: 'line',
    silent: true,
    showSymbol: false,
    clip: true,
    id: name,
    lineStyle: { color: colour, width: lineWidth, type: dash.length === 0 ? 'solid' : [...dash] },
    data: stepCurve(numbersTo(values.length), values, 1, span, width),
  }
}

const numbers = new Map<number, Float64Array>()

function numbersTo(length: number): Float64Array {
  const known = numbers.get(length)
  if (known) return known
  const column = Float64Array.from({ length }, (_, at) => at)
  numbers.clear()
  numbers.set(length, column)
  return column
}
