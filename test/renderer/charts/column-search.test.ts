import { expect, test } from 'vitest'
import {
  firstAbove,
  firstAtLeast,
  nearestIndex,
  placeOf,
  valueBetween,
} from '../../../renderer/charts/column-search.ts'

const column = Float64Array.of(0, 2, 2, 5, 9)

test('first values above and at least one given', () => {
  expect([firstAbove(column, 2), firstAtLeast(column, 2)]).toEqual([3, 1])
  expect([firstAbove(column, 9), firstAtLeast(column, -1)]).toEqual([5, 0])
})

test('the nearest value, and the first of equals', () => {
  expect([
    nearestIndex(column, 2.4),
    nearestIndex(column, 3.6),
    nearestIndex(column, 99),
    nearestIndex(column, -3),
  ]).toEqual([1, 3, 4, 0])
})

test('a place and its value lead back to each other', () => {
  expect(valueBetween(column, 3.25)).toBe(6)
  expect(placeOf(column, 6)).toBe(3.25)
  expect(valueBetween(column, 77)).toBe(9)
})
