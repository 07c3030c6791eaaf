import { expect, test } from 'vitest'
import {
  defaultPlace,
  moveEdge,
  moveSpan,
  windowOf,
  zoomCoverage,
  zoomPatterns,
} from '../../../renderer/charts/chart-window.ts'

test('the usual view holds goal and highest coverage and the last 3 to 4 % below', () => {
  const { patterns, coverage } = defaultPlace(1024, 0.9912, 0.98)
  expect(patterns).toEqual({ from: 0, to: 1024 })
  expect(0.9912 - coverage.from).toBeCloseTo(0.035)
  expect(coverage.to).toBeGreaterThan(0.9912)
})

test('a goal far below what is reached is in view, and one above it', () => {
  expect(defaultPlace(10, 0.99, 0.8).coverage.from).toBeLessThan(0.8)
  expect(defaultPlace(10, 0.9, 0.99).coverage.to).toBeGreaterThan(0.99)
})

test('another axis shows the same patterns', () => {
  const place = { patterns: { from: 1, to: 3 }, coverage: { from: 0, to: 1 } }
  expect(windowOf(place, Float64Array.of(7, 8, 10, 15)).x).toEqual({ from: 8, to: 15 })
})

test('zooming keeps the place under the pointer and stays inside', () => {
  const place = defaultPlace(1000, 0.99, null)
  const near = zoomPatterns(place, 0.5, 400, 1000).patterns
  expect(near).toEqual({ from: 200, to: 700 })
  expect(zoomPatterns({ ...place, patterns: near }, 8, 400, 1000).patterns).toEqual({ from: 0, to: 1000 })
  expect(
    zoomPatterns(place, 0, 500, 1000).patterns.to - zoomPatterns(place, 0, 500, 1000).patterns.from,
  ).toBe(12)
  expect(zoomCoverage(place, 1e9, 0.97).coverage).toEqual({ from: 0, to: 1.02 })
})

test('spans and edges stop at what there is', () => {
  expect(moveSpan({ from: 10, to: 30 }, -50, { from: 0, to: 100 })).toEqual({ from: 0, to: 20 })
  expect(moveEdge({ from: 10, to: 30 }, 'to', 500, { from: 0, to: 100 })).toEqual({ from: 10, to: 100 })
  expect(moveEdge({ from: 10, to: 30 }, 'from', 500, { from: 0, to: 100 })).toEqual({ from: 18, to: 30 })
})
