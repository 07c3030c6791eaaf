import { describe, expect, test } from 'vitest'
import { buildPlan, type PlanInput } from '../../../app/engine/choose/build-plan.ts'
import { compileRules } from '../../../app/engine/choose/choice-rules.ts'
import type { Constraints } from '../../../app/engine/choose/constraints.ts'
import { NO_CONSTRAINTS } from '../../../app/engine/choose/constraints.ts'
import { steepestFirst } from '../../../app/engine/choose/steepest-first.ts'
import { buildFaultList } from '../../../app/engine/faults/build-fault-list.ts'
import { readBench } from '../../../app/engine/formats/bench/read-bench.ts'
import { DEFAULT_PRODUCT } from '../../../app/engine/quality/product.ts'
import { emptyPlane, setBit } from '../../../app/engine/simulate/pattern-set.ts'
import { simulateTwin } from '../../../app/engine/simulate/twin.ts'
import { DEFAULT_TESTER } from '../../../app/engine/tester/tester.ts'

/** A plan of one NAND gate `y` with inputs `a` and `b` under the patterns 00, 01, 11, 10, at 1 ms a vector. */
function planOfNand(
  { weights, ...changes }: Partial<PlanInput> & { weights?: Float64Array } = {},
  constraints: Partial<Constraints> = {},
) {
  const text = 'INPUT(a)\nINPUT(b)\nOUTPUT(y)\ny = NAND(a, b)\n'
  const { circuit } = readBench({ name: 'nand.bench', text }).value!
  const faults = buildFaultList(circuit)
  const nPatterns = 4
  const value = emptyPlane(2, nPatterns)
  for (const [pattern, bits] of ['00', '01', '11', '10'].entries()) {
    for (const row of [0, 1]) if (bits[row] === '1') setBit(value, row, pattern)
  }
  const bursts = [{ name: 'all', first: 0, count: nPatterns }]
  const set = { unknown: null, expected: null, observed: null, cycles: null, timeOnly: null, bursts }
  const patterns = { ...set, nPatterns, value }
  const { matrix } = simulateTwin({
    circuit,
    faults,
    patterns,
    detectionLimit: 0,
    classes: null,
    wantMatrix: true,
  })!
  const task = {
    matrix: matrix!,
    weights: weights ?? Float64Array.from(matrix!.classOfRow, (one) => faults.classSize[one]),
    costs: new Float64Array(nPatterns).fill(1),
    rules: compileRules({ ...NO_CONSTRAINTS, ...constraints }, nPatterns).rules!,
    detections: 1,
  }
  return buildPlan({
    faults,
    untestable: null,
    total: faults.nFaults,
    order: steepestFirst(task)!,
    patterns: { nPatterns, bursts, cycles: null },
    patternFile: 'nand.vec',
    scan: { flipFlops: 0, tracedChains: null, tracedLongest: null },
    tester: { ...DEFAULT_TESTER, vectorMHz: 0.001 },
    product: { ...DEFAULT_PRODUCT, yield: 0.5, residualDppm: 0 },
    program: [],
    limits: [],
    goals: [],
    ceiling: Float64Array.of(3, 5, 6, 6),
    ceilingWithin: () => null,
    smallest: null,
    knee: null,
    task,
    ...changes,
  })
}

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
    const { markers } = planOfNand({ product, knee: 1 }).result
    expect(markers.map(({ name, figures }) => [name, figures.patterns])).toEqual([
      ['knee', 1],
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
})
