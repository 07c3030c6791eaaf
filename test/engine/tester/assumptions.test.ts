import { describe, expect, test } from 'vitest'
import {
  DEFAULT_PRODUCT,
  PRODUCT_FIELDS,
  productContradictions,
  readProduct,
} from '../../../app/engine/quality/product.ts'
import { buildLineIndex } from '../../../app/engine/source/line-index.ts'
import type { Reading } from '../../../app/engine/source/diagnostic.ts'
import { fieldProblem } from '../../../app/engine/tester/assumption-field.ts'
import { DEFAULT_TESTER, readTester, TESTER_FIELDS } from '../../../app/engine/tester/tester.ts'

function finding(read: (source: { name: string; text: string }) => Reading<unknown>, text: string): string {
  const { value, diagnostics } = read({ name: 'a.json', text })
  expect(value).toBeNull()
  const [{ code, span, message, hint = '' }] = diagnostics
  const { line, column } = buildLineIndex(text).placeOf(span.start)
  return `${code} at ${line}:${column}: ${message} / ${hint}`
}

describe('a tester file', () => {
  test('may be empty: every key has a default', () => {
    expect(readTester({ name: 'a.json', text: '{}' }).value).toEqual(DEFAULT_TESTER)
  })

  test('gives what it says and defaults for the rest', () => {
    const text = '{"name": "North", "shiftMHz": 50, "sites": 8, "reloadMs": null, "indexMs": 200}'
    expect(readTester({ name: 'a.json', text }).value).toEqual({
      ...DEFAULT_TESTER,
      name: 'North',
      shiftMHz: 50,
      sites: 8,
      indexMs: 200,
    })
  })

  test.each([
    ['{"shiftMhz": 50}', 'unknown-name at 1:2: the tester file has no "shiftMhz" / Did you mean "shiftMHz"?'],
    [
      '{"shiftMHz": 0}',
      'out-of-range at 1:14: "shiftMHz" is 0; a number above 0 and up to 100000 is expected / ',
    ],
    [
      '{"costPerHour": -1}',
      'out-of-range at 1:17: "costPerHour" is -1; a number from 0 to 1000000000 is expected / ',
    ],
    ['{"sites": 2.5}', 'out-of-range at 1:11: "sites" is 2.5; a whole number from 1 to 4096 is expected / '],
    [
      '{"scanMemory": 5}',
      'contradiction at 1:16: "scanMemory" is given, "vectorMemory" is not / Give the depth of both memories, or "vectorMemory" alone where scan data sit in it',
    ],
  ])('%s is explained at its place', (text, expected) => {
    expect(finding(readTester, text)).toBe(expected)
  })
})

describe('a product file', () => {
  test('may be empty: every key has a default', () => {
    expect(readProduct({ name: 'a.json', text: '{}' }).value).toEqual(DEFAULT_PRODUCT)
  })

  test.each([
    ['{"yield": 0}', 'out-of-range at 1:11: "yield" is 0; a number above 0 and up to 1 is expected / '],
    ['{"yield": 1.01}', 'out-of-range at 1:11: "yield" is 1.01; a number above 0 and up to 1 is expected / '],
    ['{"n0": 0.9}', 'out-of-range at 1:8: "n0" is 0.9; a number from 1 to 1000000 is expected / '],
    [
      '{"shippedPerYear": 0}',
      'out-of-range at 1:20: "shippedPerYear" is 0; a number above 0 and up to 1000000000000 is expected / ',
    ],
    [
      '{"model": "williams"}',
      'unknown-name at 1:11: "model" is "williams"; "williams-brown" or "agrawal-seth-agrawal" is expected / ',
    ],
    [
      '{"yield": 0.9, "passFraction": 0.8}',
      'contradiction at 1:32: "yield" and "passFraction" both say what the yield is / Keep one of them; set the other to null',
    ],
    [
      '{"areaMm2": 4}',
      'contradiction at 1:13: "areaMm2" is given, "defectsPerCm2" is not; a yield needs both / Add "defectsPerCm2", or give "yield" instead',
    ],
    [
      '{"defectsPerCm2": 4}',
      'contradiction at 1:19: "defectsPerCm2" is given, "areaMm2" is not; a yield needs both / Add "areaMm2", or give "yield" instead',
    ],
    [
      '{"passCoverage": 0.9}',
      'contradiction at 1:18: "passCoverage" is given, "passFraction" is not / Add the pass fraction that was measured at this coverage, or remove it',
    ],
    [
      '{"ranges": {"yield": [0.9, 0.8]}}',
      'contradiction at 1:12: the range of "yield" runs from 0.9 down to 0.8 / Write the lower value first',
    ],
    [
      '{"areaShares": [\n{"block": "a", "share": 0.6}, {"block": "b", "share": 0.3}]}',
      'contradiction at 1:16: the shares of "areaShares" add up to 0.9; 1 is expected / Name what is left as a block of its own, or scale the shares',
    ],
    [
      '{"areaShares": [{"block": "a", "share": 0.5}, {"block": "a", "share": 0.5}]}',
      'contradiction at 1:16: block "a" is listed twice / Join its shares',
    ],
  ])('%s is explained at its place', (text, expected) => {
    expect(finding(readProduct, text)).toBe(expected)
  })
})

test('insertions get what they leave unsaid', () => {
  const text =
    '{"insertions": [{"name": "sort", "tester": {"sites": 4}}, {"name": "final", "bursts": ["core"]}]}'
  expect(readProduct({ name: 'a.json', text }).value?.insertions).toEqual([
    { name: 'sort', bursts: null, patterns: null, yieldIn: null, otherMs: 0, tester: { sites: 4 } },
    { name: 'final', bursts: ['core'], patterns: null, yieldIn: null, otherMs: 0, tester: {} },
  ])
})

describe('the table of fields', () => {
  test.each([
    ['tester', TESTER_FIELDS],
    ['product', PRODUCT_FIELDS],
  ] as const)(
    'of the %s has fitting defaults, and says what null stands for wherever it fits',
    (_, fields) => {
      for (const field of fields) {
        expect(fieldProblem(field as never, field.default), field.key).toBeNull()
        expect(fieldProblem(field as never, null) === null, field.key).toBe(field.nullMeans !== '')
      }
    },
  )

  test('finds nothing contradictory in the defaults', () => {
    expect(productContradictions(DEFAULT_PRODUCT)).toEqual([])
  })

  test('refuses what is no number', () => {
    const rate = TESTER_FIELDS.find(({ key }) => key === 'shiftMHz')!
    expect(fieldProblem(rate, Number.NaN)).toBe(
      '"shiftMHz" is null; a number above 0 and up to 100000 is expected',
    )
  })
})
