import type { LineSeriesOption } from 'echarts/charts'
import type { GridComponentOption } from 'echarts/components'
import type { ComposeOption } from 'echarts/core'
import { type ChartColours, type LineName, lineLook } from './chart-colours.ts'
import { niceTicks } from './nice-ticks.ts'
import { plotOf, type Size, type Window } from './plot-geometry.ts'
import { type Point, stepCurve } from './step-curve.ts'

export type CoverageOption = ComposeOption<LineSeriesOption | GridComponentOption>

/** A curve at every number of patterns: where it stands along the axis and what it detects there. */
export type Curve = {
  readonly name: LineName
  readonly xs: Float64Array
  readonly ys: Float64Array
}

export type CoverageScene = {
  readonly size: Size
  readonly window: Window
  /** What all faults weigh: the curves are divided by it. */
  readonly total: number
  readonly curves: readonly Curve[]
  /** No choice of these patterns lies above it; null while it is not known or hidden. */
  readonly ceiling: Curve | null
  /** The last place along the axis and the least coverage that keep every limit; null where there is no such limit. */
  readonly inside: { readonly x: number | null; readonly y: number | null }
  readonly colours: ChartColours
}

/**
 * Returns what ECharts draws: the area inside all limits, the hatch above the ceiling, gridlines and curves. Whatever
 * depends on the cut lies in a layer of its own above, so that a moving cut never draws a curve again.
 */
export function coverageOption(scene: CoverageScene): CoverageOption {
  const { size, window, colours } = scene
  const plot = plotOf(size)
  const ticks = niceTicks(window.y.from, window.y.to, 6)
  return {
    animation: false,
    grid: {
      left: plot.left,
      top: plot.top,
      width: plot.right - plot.left,
      height: plot.bottom - plot.top,
      show: true,
      backgroundColor: colours.ground,
      borderWidth: 0,
    },
    xAxis: { type: 'value', show: false, min: window.x.from, max: window.x.to },
    yAxis: {
      type: 'value',
      min: window.y.from,
      max: window.y.to,
      // Areas lie under the gridlines, curves above.
      z: 4,
      axisLine: { show: false },
      axisTick: { show: false, customValues: ticks },
      axisLabel: { show: false, customValues: ticks },
      splitLine: { lineStyle: { color: colours.line, width: 1 } },
    },
    series: [...areas(scene, plot.right - plot.left), ...lines(scene, plot.right - plot.left)],
  }
}

const QUIET = { type: 'line', silent: true, showSymbol: false, clip: true } as const

function areas(
  { window, inside, ceiling, total, colours }: CoverageScene,
  width: number,
): LineSeriesOption[] {
  const right = inside.x === null ? window.x.to : Math.min(inside.x, window.x.to)
  const bottom = inside.y ?? window.y.from
  const hasInside = (inside.x !== null || inside.y !== null) && right > window.x.from && bottom < window.y.to
  const insideArea: LineSeriesOption = {
    ...QUIET,
    id: 'inside',
    z: 2,
    lineStyle: { width: 0 },
    areaStyle: { color: colours.inside, opacity: 1, origin: Math.max(bottom, window.y.from) },
    data: hasInside
      ? [
          [window.x.from, window.y.to],
          [right, window.y.to],
        ]
      : [],
  }
  const above: LineSeriesOption = {
    ...QUIET,
    id: 'above the ceiling',
    z: 3,
    lineStyle: { width: 0 },
    areaStyle: { color: hatch(colours.hatch), opacity: 1, origin: 'end' },
    data: ceiling === null ? [] : within(stepCurve(ceiling.xs, ceiling.ys, total, window.x, width), window),
  }
  return [insideArea, above]
}

function lines(
  { curves, ceiling, total, window, colours }: CoverageScene,
  width: number,
): LineSeriesOption[] {
  const all = ceiling === null ? curves : [ceiling, ...curves]
  return all.map(({ name, xs, ys }) => {
    const { colour, dash, width: lineWidth } = lineLook(name, colours)
    return {
      ...QUIET,
      id: name,
      z: 5,
      lineStyle: {
        color: colour,
        width: lineWidth,
        type: dash.length === 0 ? 'solid' : [...dash],
        cap: name === 'ceiling' ? 'round' : 'butt',
        join: 'round',
      },
      data: stepCurve(xs, ys, total, window.x, width),
    }
  })
}

/** The hatch ends at the top of the plot also where the curve has left it. */
function within(points: readonly Point[], { y }: Window): Point[] {
  return points.map(([x, coverage]) => [x, Math.min(coverage, y.to)])
}

/** A tile of slanted lines; ECharts takes it where its types know of colours alone. */
function hatch(colour: string): string {
  const stroke = { d: 'M-1 1L1 -1M0 6L6 0M5 7L7 5', stroke: colour, 'stroke-width': 1.1, fill: 'none' }
  return { svgElement: { tag: 'path', attrs: stroke }, svgWidth: 6, svgHeight: 6 } as unknown as string
}
