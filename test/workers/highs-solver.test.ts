import { describe, expect, test } from 'vitest'
import { MipRows, type MipModel } from '../../app/engine/choose/mip.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import { createHighsSolver } from '../../app/workers/highs-solver.ts'

const solve = createHighsSolver()
const always = (): boolean => true

/** Two products on two machines: 3x + 5y most, with x + 2y ≤ 7 and 3x + y ≤ 9; on paper x = 11/5, y = 12/5, worth 18.6. */
function products(isWhole: 0 | 1): MipModel {
  const rows = new MipRows()
  rows.add([0, 1], [1, 2], -Infinity, 7)
  rows.add([0, 1], [3, 1], -Infinity, 9)
  return {
    goal: 'most',
    cost: Float64Array.of(3, 5),
    upper: Float64Array.of(10, 10),
    isWhole: Uint8Array.of(isWhole, isWhole),
    ...rows.finish(),
  }
}

describe('the solver', () => {
  test('finds the best fractions', () => {
    const { state, values, objective, bound } = solve(products(0), always)
    expect(state).toBe('optimal')
    expect([...(values ?? [])].map((value) => value.toFixed(6))).toEqual(['2.200000', '2.400000'])
    expect([objective, bound].map((value) => value.toFixed(6))).toEqual(['18.600000', '18.600000'])
  })

  test('finds the best whole numbers, with or without a start', () => {
    // On paper: (1, 3) is worth 18, and 18.6 rounds down to no more.
    for (const start of [undefined, Float64Array.of(1, 1)]) {
      const { state, values, objective, bound } = solve(products(1), always, start)
      expect({
        state,
        values: [...(values ?? [])].map(Math.round),
        objective: Math.round(objective),
        bound: Math.round(bound),
      }).toEqual({
        state: 'optimal',
        values: [1, 3],
        objective: 18,
        bound: 18,
      })
    }
  })

  test('says when nothing fits', () => {
    const rows = new MipRows()
    rows.add([0, 1], 1, 3, Infinity)
    const model = { ...products(1), goal: 'least', upper: Float64Array.of(1, 1), ...rows.finish() } as const
    expect(solve(model, always)).toMatchObject({ state: 'infeasible', values: null })
  })

  test('stops when it is told to, with bounds that hold', () => {
    const random = createRandom(2)
    const rows = new MipRows()
    for (let row = 0; row < 120; row++)
      rows.add(new Set(Array.from({ length: 12 }, () => random.below(150))), 1, 1, Infinity)
    const ones = new Float64Array(150).fill(1)
    const model: MipModel = {
      goal: 'least',
      cost: ones,
      upper: ones,
      isWhole: new Uint8Array(150).fill(1),
      ...rows.finish(),
    }
    let questions = 0
    const { state, values, objective, bound } = solve(model, () => ++questions < 3, ones)
    expect(state).toBe('stopped')
    expect(questions).toBeGreaterThanOrEqual(3)
    expect(bound).toBeLessThanOrEqual(objective)
    expect(values === null ? 150 : values.reduce((sum, value) => sum + value, 0)).toBeGreaterThan(0)
  })
})
