import { describe, expect, test } from 'vitest'
import { DEFAULT_PRODUCT, type Product } from '../../../app/engine/quality/product.ts'
import { DEFAULT_TESTER, type Tester } from '../../../app/engine/tester/tester.ts'
import {
  type BurstMeasure,
  buildTimeModel,
  type PatternFacts,
  timeColumns,
} from '../../../app/engine/tester/time-model.ts'

const NO_TRACE = { tracedChains: null, tracedLongest: null }

function patternsOf(counts: readonly number[], cycles: readonly number[] | null = null): PatternFacts {
  let first = 0
  const bursts = counts.map((count, at) => {
    const burst = { name: `burst ${at + 1}`, first, count }
    first += count
    return burst
  })
  return { nPatterns: first, bursts, cycles: cycles === null ? null : Uint32Array.from(cycles) }
}

function columnsOf({
  tester = {},
  product = {},
  patterns = patternsOf([3]),
  flipFlops = 0,
  sequence = Array.from({ length: patterns.nPatterns }, (_, p) => p),
  measures = [],
}: {
  tester?: Partial<Tester>
  product?: Partial<Product>
  patterns?: PatternFacts
  flipFlops?: number
  sequence?: readonly number[]
  measures?: readonly (BurstMeasure | null)[]
}) {
  const wholeTester = { ...DEFAULT_TESTER, ...tester }
  const wholeProduct = { ...DEFAULT_PRODUCT, ...product }
  const time = buildTimeModel(wholeTester, wholeProduct, patterns, { flipFlops, ...NO_TRACE }, measures)
  return timeColumns(
    time,
    Uint32Array.from(sequence),
    wholeTester.scanMemory !== null,
    wholeProduct.otherCycles,
  )
}

describe('a scanned circuit', () => {
  // Source: Bushnell & Agrawal 2000 (from memory): (n + 2)·L + n + 4 = 1,004,504.
  test('takes 1,004,504 cycles for 500 patterns, 2,000 flip-flops in one chain and a chain test', () => {
    const { cycles } = columnsOf({
      patterns: patternsOf([500]),
      flipFlops: 2000,
      product: { chainTest: true },
    })
    expect(cycles[500]).toBe(1_004_504)
    expect(cycles[0]).toBe(0)
  })

  // By hand: L = ceil(100 / 4) = 25; 3 patterns of 2 captures: 4 × 25 = 100 shifts at 50 kHz-thousands, 6 captures.
  // 100 / 50,000 kHz + 6 / 10,000 kHz = 0.002 + 0.0006 ms, and 0.5 ms of set-up.
  test('shifts, captures and sets up at their own rates', () => {
    const { cycles, milliseconds } = columnsOf({
      tester: { shiftMHz: 50, captureMHz: 10 },
      product: { chains: 4, captureCycles: 2, setupMs: 0.5 },
      flipFlops: 100,
    })
    expect(cycles[3]).toBe(106)
    expect(milliseconds[3]).toBeCloseTo(0.5026, 12)
    expect(milliseconds[0]).toBe(0)
  })

  // By hand: L = 10; bursts of 2 and 1 patterns: (2 + 1) × 10 + 2, then (1 + 1) × 10 + 1 = 53.
  test('pays one more load and set-up for each further burst, whenever its first pattern comes', () => {
    const patterns = patternsOf([2, 1])
    const setUp = { product: { setupMs: 1 }, flipFlops: 10, patterns, tester: { shiftMHz: 1 } }
    expect([...columnsOf(setUp).cycles]).toEqual([0, 21, 32, 53])
    expect([...columnsOf({ ...setUp, sequence: [2, 0, 1] }).cycles]).toEqual([0, 21, 42, 53])
    expect(columnsOf(setUp).milliseconds[3]).toBeCloseTo(2.053, 12)
  })

  test('takes the cycles that a pattern gives, in place of load and capture', () => {
    const patterns = patternsOf([3], [7, 0, 9])
    expect([...columnsOf({ patterns, flipFlops: 10 }).cycles]).toEqual([0, 17, 28, 37])
    expect([...columnsOf({ patterns: patternsOf([2], [7, 9]), flipFlops: 10 }).cycles]).toEqual([0, 7, 16])
  })

  test('prefers the longest chain given, then the traced one, then balanced chains', () => {
    const lengthOf = (product: Partial<Product>, tracedChains: number | null, tracedLongest: number | null) =>
      buildTimeModel(DEFAULT_TESTER, { ...DEFAULT_PRODUCT, ...product }, patternsOf([1]), {
        flipFlops: 100,
        tracedChains,
        tracedLongest,
      }).chainLength
    expect(lengthOf({ longestChain: 40 }, 4, 30)).toBe(40)
    expect(lengthOf({}, 4, 30)).toBe(30)
    expect(lengthOf({ chains: 4 }, 4, 30)).toBe(30)
    expect(lengthOf({ chains: 8 }, 4, 30)).toBe(13)
    expect(lengthOf({}, null, null)).toBe(100)
  })

  test('keeps scan data apart where the tester has a memory for them', () => {
    const together = columnsOf({ flipFlops: 10, product: { otherCycles: 100 } })
    expect([...together.vectorMemory]).toEqual([100, 121, 132, 143])
    const apart = columnsOf({
      flipFlops: 10,
      product: { otherCycles: 100 },
      tester: { scanMemory: 1000, vectorMemory: 1000 },
    })
    expect([...apart.vectorMemory]).toEqual([100, 101, 102, 103])
    expect([...apart.scanMemory]).toEqual([0, 20, 30, 40])
  })
})

describe('a circuit without scan', () => {
  test('takes one vector a pattern at the vector rate, or as many as the pattern says', () => {
    const patterns = patternsOf([3], [0, 5, 0])
    const { cycles, milliseconds } = columnsOf({ patterns, tester: { shiftMHz: 50, vectorMHz: 0.001 } })
    expect([...cycles]).toEqual([0, 1, 6, 7])
    expect([...milliseconds]).toEqual([0, 1, 6, 7])
  })

  test('has no chain test', () => {
    expect([...columnsOf({ product: { chainTest: true } }).cycles]).toEqual([0, 1, 2, 3])
  })
})

describe('measured bursts', () => {
  // By hand: 2 vectors at 1 kHz × 1.5 + 4 ms; then 1 vector × 1.1 + 2 ms: 7 and 3.1.
  test('bring their own set-up and correction, others the product’s', () => {
    const { milliseconds } = columnsOf({
      patterns: patternsOf([2, 1]),
      tester: { vectorMHz: 0.001 },
      product: { setupMs: 2, timeCorrection: 1.1 },
      measures: [{ setupMs: 4, correction: 1.5 }, null],
    })
    expect(milliseconds[2]).toBeCloseTo(7, 12)
    expect(milliseconds[3]).toBeCloseTo(10.1, 12)
  })
})

test('totals carry no rounding: what takes exactly a limit is that limit', () => {
  const { milliseconds } = columnsOf({ patterns: patternsOf([100_000]), tester: { vectorMHz: 0.01 } })
  expect(milliseconds[100_000]).toBe(10_000)
})
