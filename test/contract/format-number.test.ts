import { describe, expect, test } from 'vitest'
import { NOT_KNOWN, numberFormats, textOf } from '../../app/contract/format-number.ts'

const { count, coverage, coverageInTable, coverageChange, milliseconds, dppm, costPerThousand, money } =
  numberFormats('en')
const { hours, share, duration, plain } = numberFormats('en')

test('each quantity has its digits and its unit', () => {
  expect(
    [
      coverage(0.987975),
      coverageChange(0.00053),
      milliseconds(8.2384),
      count(185_359),
      dppm(743.8),
      dppm(7.36),
      costPerThousand(0.000371, '€'),
      money(25_404, '€'),
      hours(106.1),
      share(0.94),
      duration(14.23),
      duration(68),
      duration(3725),
    ].map(textOf),
  ).toEqual(
    [
      '98.80 %',
      '+0.053 %',
      '8.24 ms',
      '185,359',
      '744 DPPM',
      '7.4 DPPM',
      '€0.371 per 1,000 devices',
      '€25.4 k',
      '106 h',
      '94.0 %',
      '14.2 s',
      '1:08 min',
      '1:02:05 h',
    ].map((text) => text.replace(/ (?=[^ ]*$|per)/, '\u00a0')),
  )
  expect(coverageInTable(0.987974683)).toBe('98.797')
  expect(plain(0.123456789)).toBe('0.123457')
})

describe('a value never rounds to a promise', () => {
  test.each([
    [0.99999, '99.99'],
    [1, '100.00'],
    [0.9999, '99.99'],
    [0.00001, '0.01'],
    [0, '0.00'],
  ])('coverage of %d is shown as %s', (fraction, shown) => {
    expect(coverage(fraction).value).toBe(shown)
  })

  test.each([
    [0, 'under\u00a00.1'],
    [0.04, 'under\u00a00.1'],
    [0.05, '0.1'],
    [9.94, '9.9'],
    [9.96, '10'],
  ])('an escape rate of %d is shown as %s', (parts, shown) => {
    expect(dppm(parts).value).toBe(shown)
  })

  test('a share is 100.0 % only where it is whole', () => {
    expect([share(0.99999).value, share(1).value]).toEqual(['99.9', '100.0'])
  })

  test('a change that rounds to nothing is 0, with no sign', () => {
    expect([coverageChange(0.000001).value, coverageChange(-0.000001).value]).toEqual(['0', '0'])
    expect(coverageChange(-0.00053).value).toBe('\u22120.053')
  })
})

test('short times keep three significant digits', () => {
  expect([milliseconds(0.00052).value, milliseconds(0.0999).value, milliseconds(0).value]).toEqual([
    '0.000520',
    '0.0999',
    '0',
  ])
})

test('money scales by thousands, after rounding', () => {
  expect([999.4, 999.6, 999_600, 2.5e9, -1200].map((sum) => textOf(money(sum, '€')))).toEqual([
    '€999',
    '€1.00\u00a0k',
    '€1.00\u00a0m',
    '€2.50\u00a0bn',
    '\u2212€1.20\u00a0k',
  ])
})

test('what is not known is an en dash', () => {
  expect([coverage(null), dppm(undefined), money(Number.NaN, '€'), milliseconds(Infinity)]).toEqual(
    Array(4).fill(NOT_KNOWN),
  )
})

test('separators are the locale’s', () => {
  const german = numberFormats('de')
  expect([german.count(185_359).value, german.coverage(0.988).value]).toEqual(['185.359', '98,80'])
})
