import { describe, expect, test } from 'vitest'
import { chooseCut, type Goal, type Limit } from '../../../app/engine/choose/budget.ts'
import { priceOrder } from '../../../app/engine/choose/price.ts'
import { leastTotal, nextMillisecondBuysLess } from '../../../app/engine/choose/stopping-rules.ts'
import { DEFAULT_PRODUCT } from '../../../app/engine/quality/product.ts'
import { DEFAULT_TESTER, type Tester } from '../../../app/engine/tester/tester.ts'
import { buildTimeModel } from '../../../app/engine/tester/time-model.ts'

// Five patterns of 1 ms and one cycle; the fifth gains nothing.
const CURVE = { detected: Float64Array.of(0, 50, 80, 90, 95, 95), total: 100 }

function cut(
  limits: Limit[],
  goals: Goal[],
  chosen = 4,
  tester: Partial<Tester> = {},
  mayCut = new Uint8Array(6).fill(1),
) {
  const wholeTester = { ...DEFAULT_TESTER, vectorMHz: 0.001, ...tester }
  const product = { ...DEFAULT_PRODUCT, residualDppm: 0 }
  const time = buildTimeModel(
    wholeTester,
    product,
    { nPatterns: 5, bursts: [{ name: 'all', first: 0, count: 5 }], cycles: null },
    { flipFlops: 0, tracedChains: null, tracedLongest: null },
  )
  const testCoverage = CURVE.detected.map((faults) => faults / 100)
  const pricing = { tester: wholeTester, product, time, trueYield: 0.5, restMs: 10 }
  const priced = priceOrder(Uint32Array.of(0, 1, 2, 3, 4), testCoverage, pricing)
  return chooseCut({ curve: CURVE, priced, chosen, mayCut, limits, goals })
}

describe('under limits', () => {
  test('the cut is the longest prefix that fits; exactly the limit fits', () => {
    const limit: Limit = { kind: 'milliseconds', most: 3 }
    expect(cut([limit], [])).toEqual({ patterns: 3, stop: limit, broken: null, unmet: [] })
    expect(cut([{ kind: 'milliseconds', most: 2.999 }], []).patterns).toBe(2)
    expect(cut([{ kind: 'deviceMilliseconds', most: 12 }], []).patterns).toBe(2)
    expect(cut([{ kind: 'cycles', most: 1 }], []).patterns).toBe(1)
    expect(cut([{ kind: 'patterns', most: 0 }], []).patterns).toBe(0)
  })

  test('a pattern without a gain is not chosen, though it fits', () => {
    expect(cut([{ kind: 'patterns', most: 100 }], [])).toEqual({
      patterns: 4,
      stop: null,
      broken: null,
      unmet: [],
    })
    expect(cut([], [], 5).patterns).toBe(5)
  })

  test('the tightest limit stops the cut, the memory among them', () => {
    const patterns: Limit = { kind: 'patterns', most: 2 }
    expect(cut([{ kind: 'cycles', most: 3 }, patterns], []).stop).toEqual(patterns)
    expect(cut([patterns], [], 4, { vectorMemory: 1 })).toEqual({
      patterns: 1,
      stop: { kind: 'vectorMemory' },
      broken: null,
      unmet: [],
    })
    expect(cut([patterns], [], 4, { vectorMemory: 1, reloadMs: 7 }).patterns).toBe(2)
  })
})

describe('for goals', () => {
  test('the cut is the shortest prefix that meets them; exactly the goal meets it', () => {
    expect(cut([], [{ kind: 'coverage', least: 0.8 }])).toEqual({
      patterns: 2,
      stop: null,
      broken: null,
      unmet: [],
    })
    expect(cut([], [{ kind: 'coverage', least: 0.801 }]).patterns).toBe(3)
    expect(cut([], [{ kind: 'coverage', least: 0 }]).patterns).toBe(0)
    // Source: Williams & Brown 1981: T = 0.95 at Y = 0.5 is 34,064 DPPM, T = 0.9 is 66,967.
    expect(cut([], [{ kind: 'dppm', most: 34_064 }]).patterns).toBe(4)
    expect(cut([], [{ kind: 'dppm', most: 66_968 }]).patterns).toBe(3)
    const goals: Goal[] = [
      { kind: 'coverage', least: 0.5 },
      { kind: 'dppm', most: 34_064 },
    ]
    expect(cut([], goals).patterns).toBe(4)
  })

  test('out of the patterns’ reach, the nearest is named, and nothing but the patterns stands in the way', () => {
    const goal: Goal = { kind: 'coverage', least: 0.96 }
    expect(cut([], [goal], 5)).toEqual({
      patterns: 4,
      stop: null,
      broken: null,
      unmet: [{ goal, nearest: 0.95, stop: null }],
    })
  })

  test('out of reach within a limit, the limit is named', () => {
    const goal: Goal = { kind: 'coverage', least: 0.95 }
    const limit: Limit = { kind: 'milliseconds', most: 3.5 }
    expect(cut([limit], [goal])).toEqual({
      patterns: 3,
      stop: limit,
      broken: null,
      unmet: [{ goal, nearest: 0.9, stop: limit }],
    })
  })
})

describe('with constraints', () => {
  // Patterns 2 and 3 stay together, the first is kept: cuts may lie after 1, 3, 4 and 5.
  const mayCut = Uint8Array.of(0, 1, 0, 1, 1, 1)

  test('the cut keeps groups whole', () => {
    const limit: Limit = { kind: 'patterns', most: 2 }
    expect(cut([limit], [], 4, {}, mayCut)).toEqual({ patterns: 1, stop: limit, broken: null, unmet: [] })
    expect(cut([], [{ kind: 'coverage', least: 0.8 }], 4, {}, mayCut).patterns).toBe(3)
  })

  test('the cut never drops what is kept, and says which limit that breaks', () => {
    const limit: Limit = { kind: 'milliseconds', most: 0.5 }
    expect(cut([limit], [], 4, {}, mayCut)).toEqual({ patterns: 1, stop: limit, broken: limit, unmet: [] })
  })
})

describe('stopping rules', () => {
  // By hand: the milliseconds buy 0.5, 0.3, 0.1, 0.05, 0 of coverage.
  test('the next millisecond buys less from where no later one buys as much', () => {
    const milliseconds = Float64Array.of(0, 1, 2, 3, 4, 5)
    expect(nextMillisecondBuysLess(CURVE, milliseconds, 5, 0.06)).toBe(3)
    expect(nextMillisecondBuysLess(CURVE, milliseconds, 5, 0.05)).toBe(4)
    expect(nextMillisecondBuysLess(CURVE, milliseconds, 5, 0.9)).toBe(0)
  })

  // By hand: at half a millisecond a pattern, two patterns a millisecond: from pattern 2 on 0.15, from 3 on 0.05.
  test('short patterns count together, long ones by their rate', () => {
    const short = Float64Array.of(0, 0.5, 1, 1.5, 2, 2.5)
    expect(nextMillisecondBuysLess(CURVE, short, 5, 0.1)).toBe(3)
    const long = Float64Array.of(0, 10, 20, 30, 40, 50)
    expect(nextMillisecondBuysLess(CURVE, long, 5, 0.03)).toBe(2)
  })

  test('the least total is the first of its kind', () => {
    expect(leastTotal(Float64Array.of(9, 4, 2, 2, 1), 3)).toBe(2)
  })
})
