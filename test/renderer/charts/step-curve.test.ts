import fc from 'fast-check'
import { expect, test } from 'vitest'
import { stepCurve } from '../../../renderer/charts/step-curve.ts'

const span = (from: number, to: number) => ({ from, to })

test('a sparse curve is drawn in steps: the gain of a pattern stands where the pattern ends', () => {
  const points = stepCurve(Float64Array.of(0, 1, 2, 3), [0, 4, 4, 6], 2, span(0, 3), 12)
  expect(points).toEqual([
    [0, 0],
    [1, 0],
    [1, 2],
    [3, 2],
    [3, 3],
  ])
})

test('a dense curve keeps lowest and highest value of each pixel column', () => {
  const patterns = 100_000
  const xs = Float64Array.from({ length: patterns + 1 }, (_, at) => at)
  const ys = Float64Array.from(xs, (x) => Math.sqrt(x))
  const points = stepCurve(xs, ys, 1, span(0, patterns), 500)
  expect(points.length).toBeLessThanOrEqual(2 * 502)
  expect(points[0]).toEqual([0, 0])
  expect(points.at(-1)).toEqual([patterns, Math.sqrt(patterns)])
})

test('points up to the edges of the window and one beyond stay, so that the line runs to its edges', () => {
  const xs = Float64Array.from({ length: 1001 }, (_, at) => at)
  const points = stepCurve(xs, xs, 1, span(500, 510), 600)
  expect(points[0]?.[0]).toBe(500)
  expect(points.at(-1)?.[0]).toBe(511)
})

test('whatever the width, every point has a value of the columns, and places never go back', () => {
  fc.assert(
    fc.property(
      fc.array(fc.nat(50), { minLength: 1, maxLength: 400 }),
      fc.integer({ min: 1, max: 300 }),
      (gains, width) => {
        let sum = 0
        const ys = Float64Array.from([0, ...gains].map((gain) => (sum += gain)))
        const xs = Float64Array.from(ys, (_, at) => at)
        const points = stepCurve(xs, ys, 1, span(0, gains.length), width)
        const places = points.map(([x]) => x)
        expect(places).toEqual([...places].sort((a, b) => a - b))
        expect(points.filter(([, y]) => !ys.includes(y))).toEqual([])
        expect(points.at(-1)?.[1]).toBe(sum)
      },
    ),
  )
})

test('places that do not move on, as free patterns give, end', () => {
  expect(
    stepCurve(new Float64Array(1000), new Float64Array(1000).fill(3), 1, span(0, 1), 100).length,
  ).toBeLessThan(5)
})

test('level ground takes two points however long it is', () => {
  const xs = Float64Array.from({ length: 10_001 }, (_, at) => at)
  const ys = xs.map((x) => Math.min(x, 100))
  const points = stepCurve(xs, ys, 1, span(0, 10_000), 500)
  expect(points.length).toBeLessThan(20)
  expect(points.at(-1)).toEqual([10_000, 100])
})

test('a long step has a point near its beginning, which no rounding of small gains can slope', () => {
  const points = stepCurve(Float64Array.of(0, 1, 100), [0, 1, 1], 1, span(0, 100), 100)
  expect(points).toEqual([
    [0, 0],
    [1, 0],
    [1, 1],
    [3, 1],
    [100, 1],
  ])
})
