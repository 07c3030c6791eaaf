import { expect, test } from 'vitest'
import { numberFormats } from '../../../app/contract/format-number.ts'
import { missingWords, moneySentence, rangeWords } from '../../../renderer/components/money/money-words.ts'
import { moneyView } from '../../helpers/money-view.ts'

const formats = numberFormats('en')
const said = (...args: Parameters<typeof moneySentence>): string =>
  moneySentence(...args)
    .map(({ text }) => text)
    .join('')
    .replaceAll('\u00a0', ' ')

test('the sentence says what the cut costs, of what, and where the least lies', () => {
  expect(said(moneyView(), 3, formats)).toBe(
    '3 patterns cost €125 a year: €30.0 of tester time and an estimated €95.0 of escapes. The least, €120, lies at 2.',
  )
  expect(said(moneyView(), 2, formats)).toMatch(/No other cut of this order costs less\.$/)
})

test('without a volume or the cost of an escape nothing is claimed of a year’s total', () => {
  const view = moneyView({ escapeCostPerYear: null, totalPerYear: null, leastTotalCut: null })
  expect(said(view, 1, formats)).toBe('1 pattern cost €0.500 per 1,000 devices of tester time, €10.0 a year.')
  expect(missingWords(view)).toBe('What an escape costs')
  expect(missingWords({ ...view, testCostPerYear: null })).toBe('How many devices are shipped a year')
  expect(missingWords({ ...view, testCostPerYear: null, sensitivity: [] })).toBe(
    'How many devices are shipped a year and what an escape costs',
  )
})

test('a range has its unit once', () => {
  const range = (input: Parameters<typeof rangeWords>[0], low: number, high: number): string =>
    rangeWords(input, low, high, '€', formats).replaceAll('\u00a0', ' ')
  expect(range('yield', 0.893, 0.927)).toBe('89.3 to 92.7 %')
  expect(range('costPerHour', 46.4, 69.6)).toBe('€46.4 to €69.6 an hour')
  expect(range('shiftMHz', 4, 6)).toBe('4 to 6 MHz')
})
