import { describe, expect, test } from 'vitest'
import { DEFAULT_PRODUCT } from '../../../app/engine/quality/product.ts'
import { burstMeasures, matchProgram, type ProgramRow } from '../../../app/engine/tester/program.ts'
import { DEFAULT_TESTER } from '../../../app/engine/tester/tester.ts'
import { buildTimeModel } from '../../../app/engine/tester/time-model.ts'

const ROW: ProgramRow = {
  burst: '',
  kind: '',
  file: '',
  patterns: null,
  measuredMs: null,
  setupMs: null,
  mustStay: false,
  mustBeFirst: false,
}
const PATTERNS = {
  nPatterns: 3,
  bursts: [
    { name: 'core', first: 0, count: 2 },
    { name: 'pads', first: 2, count: 1 },
  ],
  cycles: null,
}
const TIME = buildTimeModel({ ...DEFAULT_TESTER, vectorMHz: 0.001 }, DEFAULT_PRODUCT, PATTERNS, {
  flipFlops: 0,
  tracedChains: null,
  tracedLongest: null,
})
const GENERAL = { setupMs: 5, correction: 1.2 }

describe('a program list', () => {
  test('adds up the parts that are no bursts of the set', () => {
    const rows = [
      { ...ROW, burst: 'continuity', measuredMs: 40, setupMs: 2 },
      { ...ROW, burst: 'core', measuredMs: 3 },
      { ...ROW, burst: 'leakage', measuredMs: 100 },
    ]
    expect(matchProgram(rows, PATTERNS, 'a.vec')).toEqual({ fixedMs: 142, rowOf: [rows[1], null] })
  })

  test('may name a single burst by its file', () => {
    const rows = [{ ...ROW, burst: 'logic', file: 'a.vec', measuredMs: 3 }]
    const single = { ...PATTERNS, bursts: [{ name: 'patterns', first: 0, count: 3 }] }
    expect(matchProgram(rows, single, 'a.vec')).toEqual({ fixedMs: 0, rowOf: rows })
    expect(matchProgram(rows, single, 'b.vec').fixedMs).toBe(3)
  })

  // By hand: the two patterns of "core" are computed at 2 ms and measured at 3: a factor of 1.5.
  test('corrects a burst by its measured time', () => {
    const rows = [{ ...ROW, burst: 'core', measuredMs: 3, setupMs: 7 }]
    expect(burstMeasures(matchProgram(rows, PATTERNS, ''), PATTERNS, TIME, GENERAL)).toEqual([
      { setupMs: 7, correction: 1.5 },
      null,
    ])
  })

  test('corrects nothing by a time of another number of patterns', () => {
    const rows = [{ ...ROW, burst: 'core', measuredMs: 3, patterns: 9 }]
    expect(burstMeasures(matchProgram(rows, PATTERNS, ''), PATTERNS, TIME, GENERAL)[0]).toEqual(GENERAL)
  })
})
