import { expect, test } from 'vitest'
import { chartCsv } from '../../../renderer/components/budget/chart-data.ts'
import { sortedRows } from '../../../renderer/components/budget/pattern-rows.ts'
import { budgetView, orderColumns } from '../../helpers/budget-columns.ts'

const columns = orderColumns('steepest', 20, 4)
const rows = (key: 'position' | 'pattern' | 'gain' | 'alone', isDown = false, wanted = '') =>
  sortedRows(columns, columns.detected, { key, isDown }, wanted)

test('rows as applied need no list of their own', () => {
  expect(rows('position')).toBeNull()
})

test('rows sort by their values, ties as applied', () => {
  expect([...(rows('pattern') ?? [])].slice(0, 3)).toEqual([19, 18, 17])
  expect([...(rows('gain', true) ?? [])].slice(0, 3)).toEqual([0, 1, 2])
  expect([...(rows('alone', true) ?? [])].slice(0, 4)).toEqual([0, 7, 14, 1])
})

test('patterns are found by the beginning of their number', () => {
  expect([...(rows('position', false, '2') ?? [])].map((at) => columns.pattern[at])).toEqual([20, 2])
  expect(rows('position', false, '99')?.length).toBe(0)
})

// RFC 4180 for the form; values in plain digits as files have them.
test('the data of the chart are CSV with a row for each number of patterns', () => {
  const lines = chartCsv(budgetView(10), new Float64Array(11).fill(7), 1).split('\r\n')
  expect(lines).toHaveLength(13)
  expect(new Set(lines.slice(0, 12).map((line) => line.split(',').length)).size).toBe(1)
  expect(lines[0]?.startsWith('patterns,as-delivered pattern,')).toBe(true)
  expect(lines[1]?.startsWith('0,,0,0,0,')).toBe(true)
})
