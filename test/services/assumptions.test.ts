import { describe, expect, test } from 'vitest'
import { changeValues, formFields, resolveProduct, resolveTester } from '../../app/services/assumptions.ts'
import { DEFAULT_PRODUCT } from '../../app/engine/quality/product.ts'
import { DEFAULT_TESTER } from '../../app/engine/tester/tester.ts'

describe('assumptions', () => {
  test('no values at all give the defaults that files have', () => {
    expect(resolveTester('T', {})).toEqual({ values: { ...DEFAULT_TESTER, name: 'T' }, errors: [] })
    expect(resolveProduct('P', {})).toEqual({ values: { ...DEFAULT_PRODUCT, name: 'P' }, errors: [] })
  })

  test('every default that a form shows is one that it takes', () => {
    const { product, tester } = formFields()
    for (const [of, fields] of [
      ['product', product],
      ['tester', tester],
    ] as const) {
      const defaults = Object.fromEntries(fields.map((field) => [field.key, field.default]))
      expect(changeValues(of, {}, defaults).errors).toEqual([])
    }
  })

  test('a change that does not fit is refused with its reason, the others are taken', () => {
    const { values, errors } = changeValues('tester', { sites: 4 }, { sites: 0, indexMs: 100, shiftMhz: 5 })
    expect(values).toEqual({ sites: 4, indexMs: 100 })
    expect(errors.map(({ key }) => key)).toEqual(['sites', 'shiftMhz'])
  })

  test('null takes a field back to its default', () => {
    expect(changeValues('product', { yield: 0.5, n0: 3 }, { yield: null }).values).toEqual({ n0: 3 })
  })

  test('shares of area are typed a block a line; what they lack is named', () => {
    const shares = (text: string) => resolveProduct('P', { areaShares: text })
    expect(shares('core/alu,0.4\nbus[3,0],0.6').values.areaShares).toEqual([
      { block: 'core/alu', share: 0.4 },
      { block: 'bus[3,0]', share: 0.6 },
    ])
    const messageOf = (text: string) => shares(text).errors.map(({ key, message }) => [key, message])
    expect(messageOf('a,0.4\nb,0.5')).toEqual([
      ['areaShares', expect.stringContaining('add up to 0.9; 1 is')],
    ])
    expect(messageOf('a,0.4\nb,x')).toEqual([['areaShares', expect.stringContaining('share of "b" is x')]])
    expect(messageOf('a,1\nb,')).toEqual([['areaShares', expect.stringContaining('"b" is missing')]])
    expect(messageOf(',1')).toEqual([['areaShares', expect.stringContaining('Block 1 has no name')]])
    expect(messageOf('a,0.5\na,0.5')).toEqual([['areaShares', expect.stringContaining('listed twice')]])
    expect(changeValues('product', {}, { areaShares: 'a,2' }).errors).toHaveLength(1)
  })

  test('switches are words in forms and values in files', () => {
    const { values, errors } = resolveProduct('P', { chainTest: 'yes' })
    expect(errors).toEqual([])
    expect(values.chainTest).toBe(true)
    expect(resolveProduct('P', { chainTest: 'perhaps' }).errors).toMatchObject([{ key: 'chainTest' }])
  })

  test('a range is typed as one, for each input, and a wrong one is named at its own field', () => {
    const { values, errors } = resolveProduct('P', { 'ranges.yield': '0.8 to 0.9', 'ranges.n0': '1 – 3' })
    expect(errors).toEqual([])
    expect(values.ranges).toEqual({ yield: [0.8, 0.9], n0: [1, 3] })
    const wrong = resolveProduct('P', { 'ranges.yield': '0.9 to 0.8', 'ranges.sites': '4' })
    expect(wrong.values.ranges).toBeNull()
    expect(wrong.errors).toMatchObject([
      { key: 'ranges.yield', message: expect.stringContaining('the lower first') },
      {
        key: 'ranges.sites',
        message: expect.stringContaining('two numbers, the lower first, such as 4 to 8, are expected'),
      },
    ])
    expect(changeValues('product', {}, { 'ranges.shiftMHz': 'fast' }).errors).toHaveLength(1)
  })

  test('a yield outside 0 to 1 and values that contradict each other are named at their field', () => {
    expect(resolveProduct('P', { yield: 1.2 }).errors).toMatchObject([{ key: 'yield' }])
    expect(resolveProduct('P', { areaMm2: 4 }).errors).toMatchObject([{ key: 'areaMm2' }])
    expect(resolveTester('T', { scanMemory: 100 }).errors).toMatchObject([{ key: 'scanMemory' }])
  })
})
