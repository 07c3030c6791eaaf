import { expect, it } from 'vitest'
import { readStil } from '../../../app/engine/formats/stil/read-stil.ts'
import { compareResponse } from '../../../app/engine/simulate/compare-response.ts'
import { smallScanDesign, smallStil } from '../formats/stil/small-scan-design.ts'

const design = smallScanDesign()

function compare(pattern: string) {
  const { value } = readStil({ name: 'small', text: smallStil(pattern) }, design)
  return compareResponse(design, value!.patterns)
}

// By hand, from the equations in small-scan-design.ts: A=1 B=0 F=001 gives Y=0 Z=1 and F1=1 F2=1 F3=0; SO shows F3 F2 F1.
it('finds nothing where all expected values fit', () => {
  const { total, byPattern, first } = compare(
    'Call load { SI=100; } Call capture { pi=10; po=LH; } Call load { SO=LHH; }',
  )
  expect(total).toEqual({ compared: 5, mismatches: 0, unknown: 0 })
  expect([...byPattern, ...first]).toEqual([0])
})

it('names output, chain, cell and pattern of what does not fit', () => {
  const found = compare(
    'Call load { SI=100; } Call capture { pi=10; po=HH; } Call load { SI=000; SO=HXL; } Call look { pi=00; po=LL; }',
  )
  expect(found.first).toEqual([
    { pattern: 0, name: 'Y', chain: null, expected: 1 },
    { pattern: 0, name: 'F1', chain: { name: 'c1', cell: 0 }, expected: 0 },
    { pattern: 0, name: 'F3', chain: { name: 'c1', cell: 2 }, expected: 1 },
  ])
  expect(Array.from(found.byPattern)).toEqual([3, 0])
  expect(found.byOutput).toEqual([
    { name: 'Y', compared: 2, mismatches: 1, unknown: 0 },
    { name: 'Z', compared: 2, mismatches: 0, unknown: 0 },
  ])
  expect(found.byChain).toEqual([{ name: 'c1', compared: 2, mismatches: 2, unknown: 0 }])
})

it('compares nothing where the good machine has X, and counts it', () => {
  const { total } = compare('Call load { SI=100; } Call capture { pi=1N; po=LH; } Call load { SO=LHH; }')
  // Y = A and B is X, and so is F3 = F2 xor B.
  expect(total).toEqual({ compared: 3, mismatches: 0, unknown: 2 })
})

it('compares an unload without a capture with what was loaded', () => {
  const { loads, unloads, first } = compare(
    'Call load { SI=100; } Call look { pi=10; po=LH; } Call load { SO=LLL; }',
  )
  expect(loads).toEqual({ compared: 3, mismatches: 1, unknown: 0 })
  expect(unloads.compared).toBe(0)
  expect(first).toMatchObject([{ name: 'F3', expected: 0 }])
})
