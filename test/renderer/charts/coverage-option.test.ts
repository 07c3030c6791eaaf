import { expect, test } from 'vitest'
import { axisColumn } from '../../../renderer/charts/axis.ts'
import { chartColours } from '../../../renderer/charts/chart-colours-of.ts'
import { coverageOption, type CoverageScene } from '../../../renderer/charts/coverage-option.ts'
import { leastEffort } from '../../../renderer/charts/least-effort.ts'
import { lineLabels } from '../../../renderer/charts/line-labels.ts'
import { plotOf } from '../../../renderer/charts/plot-geometry.ts'
import { paletteOf } from '../../../renderer/tokens.ts'
import { orderColumns } from '../../helpers/budget-columns.ts'

const columns = orderColumns('steepest', 1000, 80)
const curve = { name: 'steepest' as const, xs: axisColumn(columns, 'patterns'), ys: columns.detected }
const scene: CoverageScene = {
  size: { width: 800, height: 400 },
  window: { x: { from: 0, to: 1000 }, y: { from: 0.95, to: 1 } },
  total: 40_000,
  curves: [curve],
  ceiling: null,
  inside: { x: 500, y: 0.98 },
  colours: chartColours(paletteOf('light')),
}
const seriesOf = (changes: Partial<CoverageScene> = {}) => {
  const { series } = coverageOption({ ...scene, ...changes })
  return (Array.isArray(series) ? series : []).map(
    ({ id, data }) => [id, Array.isArray(data) ? data.length : 0] as const,
  )
}

test('the area inside the limits ends at them', () => {
  const { series } = coverageOption(scene)
  const inside = Array.isArray(series) ? series.find(({ id }) => id === 'inside') : undefined
  expect(inside).toMatchObject({
    data: [
      [0, 1],
      [500, 1],
    ],
    areaStyle: { origin: 0.98 },
  })
})

test('there is a hatch only above a ceiling that is known', () => {
  expect(new Map(seriesOf()).get('above the ceiling')).toBe(0)
  const ceiling = { ...curve, name: 'ceiling' as const }
  expect(new Map(seriesOf({ ceiling })).get('above the ceiling')).toBeGreaterThan(10)
  expect(seriesOf({ ceiling }).map(([id]) => id)).toEqual([
    'inside',
    'above the ceiling',
    'ceiling',
    'steepest',
  ])
})

test('where patterns take different times, a ceiling stands where the quickest choice of so many would', () => {
  expect([...leastEffort(Float64Array.of(0, 5, 6, 9))]).toEqual([0, 1, 4, 9])
  const even = Float64Array.of(0, 8, 10, 12)
  expect(leastEffort(even)).toBe(even)
})

test('names stand beside their lines, clear of each other', () => {
  const slow = orderColumns('as-delivered', 1000, 85)
  const labels = lineLabels(
    [
      { ...curve, label: 'Steepest first' },
      { name: 'as-delivered', xs: curve.xs, ys: slow.detected, label: 'As delivered' },
    ],
    { window: scene.window, plot: plotOf(scene.size), total: 40_000, taken: [] },
  )
  expect(labels.map(({ text }) => text)).toEqual(['Steepest first', 'As delivered'])
  expect(Math.abs((labels[0]?.at.y ?? 0) - (labels[1]?.at.y ?? 0))).toBeGreaterThan(15)
})
