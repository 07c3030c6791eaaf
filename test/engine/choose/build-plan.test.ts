import { describe, expect, test } from 'vitest'
import { DEFAULT_PRODUCT, type Product } from '../../../app/engine/quality/product.ts'
import { outcomeOfNand, planOfNand } from '../../helpers/nand-plan.ts'

// Common practice, no source: a NAND has 6 faults; {01, 11, 10} detects all, {11, 01} 5 of 6.
describe('a plan of a NAND gate', () => {
  test('orders the patterns, draws the curve and stops where nothing more is detected', () => {
    const { result } = planOfNand()
    expect(result.order).toEqual([3, 2, 4, 1])
    expect(result.curve).toEqual([3, 5, 6, 6])
    expect(result.budget).toMatchObject({
      patterns: 3,
      chosen: [3, 2, 4],
      detected: 6,
      coverage: 1,
      cycles: 3,
    })
    expect(result.budget).toMatchObject({ milliseconds: 3, perDeviceMilliseconds: 3, reloads: 0, dppm: 0 })
    expect([result.isReached, result.gap]).toEqual([true, 0])
  })

  test('under a limit keeps what fits, with what any choice could add', () => {
    const { result } = planOfNand({ limits: [{ kind: 'milliseconds', most: 2 }] })
    expect(result.budget).toMatchObject({ patterns: 2, detected: 5, plainCoverage: 5 / 6 })
    expect(result.gap).toBe(0)
    // Source: Williams & Brown 1981: 1 − 0.5^(1/6) = 0.1091013.
    expect(result.budget.dppm).toBeCloseTo(109_101.28, 1)
    expect(
      planOfNand({ limits: [{ kind: 'patterns', most: 1 }], ceiling: Float64Array.of(4, 5, 6, 6) }).result
        .gap,
    ).toBe(1)
  })

  test('knows what the patterns take as they were delivered', () => {
    const { asDelivered } = planOfNand({ goals: [{ kind: 'coverage', least: 5 / 6 }] }).result
    // In file order 00 detects y/0; 01 adds a/1; 11 adds three: 1, 2, 5, 6.
    expect(asDelivered.curve).toEqual([1, 2, 5, 6])
    expect(asDelivered.sameDetected?.patterns).toBe(3)
    const underLimit = planOfNand({ limits: [{ kind: 'patterns', most: 2 }] }).result
    expect(underLimit.asDelivered.sameLimits).toMatchObject({ patterns: 2, detected: 2 })
  })

  test('says no to a goal out of reach, with the nearest', () => {
    const goal = { kind: 'coverage', least: 1 } as const
    const { result } = planOfNand({ goals: [goal], limits: [{ kind: 'patterns', most: 2 }] })
    expect(result.isReached).toBe(false)
    expect(result.cut.unmet).toEqual([{ goal, nearest: 5 / 6, stop: { kind: 'patterns', most: 2 } }])
  })

  test('keeps what constraints keep, whatever the limit', () => {
    const { result } = planOfNand({ limits: [{ kind: 'cycles', most: 1 }] }, { keep: [0, 1] })
    expect(result.budget.patterns).toBe(2)
    expect(result.cut.broken).toEqual({ kind: 'cycles', most: 1 })
    expect(result.isReached).toBe(false)
  })

  test('names the patterns left out where a goal could be reached with them', () => {
    const goal = { kind: 'coverage', least: 1 } as const
    const { result } = planOfNand({ goals: [goal] }, { leaveOut: [3] })
    expect(result.cut.unmet).toEqual([{ goal, nearest: 5 / 6, stop: { kind: 'leftOut' } }])
    const tooMuch = { kind: 'dppm', most: 0 } as const
    expect(planOfNand({ goals: [tooMuch] }, { leaveOut: [3] }).result.cut.unmet[0].stop).toEqual({
      kind: 'leftOut',
    })
  })

  test('quotes coverage plainly beside weights', () => {
    const { budget } = planOfNand({
      weights: Float64Array.of(1, 1, 1, 1),
      total: 4,
      limits: [{ kind: 'patterns', most: 1 }],
    }).result
    // Classes {a/0, b/0, y/1}, {a/1}, {b/1}, {y/0} count 1 each: 01 detects two of them, which are two faults.
    expect(budget).toMatchObject({
      chosen: [2],
      detected: 2,
      coverage: 0.5,
      plainDetected: 2,
      plainCoverage: 2 / 6,
    })
  })

  test('takes the yield from the pass fraction that the whole set gives', () => {
    const product = { ...DEFAULT_PRODUCT, passFraction: 0.8 }
    expect(planOfNand({ product }).result.yield).toEqual({ value: 0.8, origin: 'pass fraction' })
  })

  test('counts escapes by area where shares are given', () => {
    const areaShares = [
      { block: 'a', share: 0.75 },
      { block: '*', share: 0.25 },
    ]
    const product = { ...DEFAULT_PRODUCT, yield: 0.5, residualDppm: 0, areaShares }
    // Patterns 11 and 01 detect both faults of a, and three of the four of b and y: T = 0.75 + 0.25 × 3 / 4.
    const { result } = planOfNand({ product, limits: [{ kind: 'patterns', most: 2 }] })
    expect(result.budget.testCoverage).toBeCloseTo(0.9375, 12)
    expect(result.budget.coverage).toBeCloseTo(5 / 6, 12)
  })

  test('adds the rest of the program to every device, and corrects what was measured', () => {
    const row = { kind: '', patterns: null, setupMs: null, mustStay: false, mustBeFirst: false }
    const { budget } = planOfNand({
      program: [
        { ...row, burst: 'leakage', file: '', measuredMs: 40 },
        { ...row, burst: 'logic', file: 'nand.vec', measuredMs: 8 },
      ],
    }).result
    // All four patterns are computed at 4 ms and measured at 8: three take 6.
    expect(budget.milliseconds).toBeCloseTo(6, 12)
    expect(budget.perDeviceMilliseconds).toBeCloseTo(46, 12)
  })

  test('marks where the money is least, in ascending order of patterns', () => {
    const product = { ...DEFAULT_PRODUCT, yield: 0.5, residualDppm: 0, shippedPerYear: 1000, escapeCost: 1 }
    const { markers } = planOfNand({ product }).result
    expect(markers.map(({ name, figures }) => [name, figures.patterns])).toEqual([
      ['next millisecond', 3],
      ['least total', 3],
      ['all', 3],
    ])
  })

  test('shows how far the plan moves with each input', () => {
    const { sensitivity, whatIf } = planOfNand({ goals: [{ kind: 'dppm', most: 110_000 }] }).result
    const yieldRow = sensitivity.find(({ input }) => input === 'yield')!
    // At Y = 0.5^1.2 two patterns let 1 − 0.5^0.2 = 129,449 DPPM through: the third is needed.
    expect([yieldRow.low.outcome.patterns, yieldRow.high.outcome.patterns]).toEqual([3, 2])
    expect(whatIf.chainsByShiftRate).toBeNull()
    expect(whatIf.sitesByEfficiency.rows).toEqual([1, 2, 4])
    expect(whatIf.sitesByEfficiency.outcomes[1][4].perDeviceMilliseconds).toBeCloseTo(1, 12)
  })

  // By hand: sort runs 11 alone, which detects 3 of 6: T = 0.5, 0.5^0.5 pass, and as much comes to the final test,
  // which runs all three and lets 0.5^0.5 of that pass again.
  test('splits over insertions, each with what runs there', () => {
    const planned = { bursts: null, patterns: null, yieldIn: null, otherMs: 0, tester: {} }
    const product = {
      ...DEFAULT_PRODUCT,
      yield: 0.5,
      insertions: [
        { ...planned, name: 'sort', patterns: 1, tester: { vectorMHz: 0.0005 } },
        { ...planned, name: 'final', bursts: ['all'], otherMs: 7 },
      ],
    }
    const [sort, final] = planOfNand({ product }).result.insertions!
    expect(sort).toMatchObject({ patterns: 1, testCoverage: 0.5, yieldIn: 0.5, perDeviceMilliseconds: 2 })
    expect(sort.testedPerShipped).toBeCloseTo(2, 12)
    expect(final).toMatchObject({ patterns: 3, testCoverage: 1, perDeviceMilliseconds: 10 })
    expect(final.yieldIn).toBeCloseTo(Math.SQRT1_2, 12)
    expect(final.testedPerShipped).toBeCloseTo(Math.SQRT2, 12)
  })
})

describe('no plan is made', () => {
  const problems = (product: Partial<Product>): string[] =>
    outcomeOfNand({ product: { ...DEFAULT_PRODUCT, ...product } }).problems.map(
      ({ key, message }) => `${key}: ${message}`,
    )

  test('where blocks with a share have no faults, or faults no block', () => {
    const areaShares = [
      { block: 'a', share: 0.75 },
      { block: 'core/alu', share: 0.25 },
    ]
    expect(problems({ areaShares })).toEqual([
      'areaShares: no fault of the netlist lies in block "core/alu", so its share of the area has no coverage',
      'areaShares: 4 faults lie in none of the blocks',
    ])
  })

  test('where an insertion runs a burst that does not exist', () => {
    const insertion = { bursts: ['pads'], patterns: null, yieldIn: null, otherMs: 0, tester: {} }
    expect(problems({ insertions: [{ ...insertion, name: 'sort' }] })).toEqual([
      'insertions: insertion "sort" runs burst "pads", which the pattern set does not have',
    ])
  })
})
