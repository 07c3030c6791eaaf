import { describe, expect, test } from 'vitest'
import { compileRules } from '../../../app/engine/choose/choice-rules.ts'
import { type Constraints, NO_CONSTRAINTS } from '../../../app/engine/choose/constraints.ts'
import { cutPlaces } from '../../../app/engine/choose/cut-places.ts'
import { deliveredOrder, handOrder } from '../../../app/engine/choose/delivered-order.ts'

/** Patterns in these tests are numbered from 1, as people write them. */
function compile(nPatterns: number, changes: Partial<Constraints>) {
  const down = (list: readonly number[] = []): number[] => list.map((pattern) => pattern - 1)
  return compileRules(
    {
      ...NO_CONSTRAINTS,
      keep: down(changes.keep),
      leaveOut: down(changes.leaveOut),
      first: down(changes.first),
      together: (changes.together ?? []).map(down),
      before: (changes.before ?? []).map(([a, b]) => [a - 1, b - 1] as const),
    },
    nPatterns,
  )
}

function delivered(nPatterns: number, changes: Partial<Constraints>): number[] {
  const { rules } = compile(nPatterns, changes)
  if (rules === null) throw new Error('the constraints contradict')
  return [...deliveredOrder(rules).sequence].map((pattern) => pattern + 1)
}

function contradiction(nPatterns: number, changes: Partial<Constraints>): string | undefined {
  return compile(nPatterns, changes).contradiction?.message
}

describe('the order as delivered', () => {
  test.each<[string, Partial<Constraints>, number[]]>([
    ['is the file order without constraints', {}, [1, 2, 3, 4, 5, 6]],
    ['puts what is kept to the front', { keep: [4, 2] }, [2, 4, 1, 3, 5, 6]],
    ['puts what is left out to the end', { leaveOut: [2, 1] }, [3, 4, 5, 6, 1, 2]],
    ['closes groups up at their first pattern', { together: [[5, 2]] }, [1, 2, 5, 3, 4, 6]],
    ['lets a pattern wait for another', { before: [[5, 2]] }, [1, 5, 2, 3, 4, 6]],
    [
      'lets a pattern wait along a chain',
      {
        before: [
          [6, 5],
          [5, 1],
        ],
      },
      [6, 5, 1, 2, 3, 4],
    ],
    ['starts with what runs first', { first: [3, 1] }, [3, 1, 2, 4, 5, 6]],
    [
      'fills the places after a group that runs first',
      { first: [4], together: [[2, 4, 6]] },
      [4, 2, 6, 1, 3, 5],
    ],
    ['sorts inside a group as pairs demand', { together: [[2, 3, 4]], before: [[4, 2]] }, [1, 3, 4, 2, 5, 6]],
    ['keeps what a kept pattern waits for', { keep: [2], before: [[6, 2]] }, [6, 2, 1, 3, 4, 5]],
  ])('%s', (_, changes, expected) => {
    expect(delivered(6, changes)).toEqual(expected)
  })
})

describe('constraints that contradict', () => {
  test.each<[Partial<Constraints>, string]>([
    [{ keep: [1, 3], leaveOut: [3] }, 'pattern 3 is kept and left out'],
    [{ first: [3], leaveOut: [3] }, 'pattern 3 runs first and is left out'],
    [{ together: [[2, 3]], leaveOut: [3] }, 'pattern 3 stays together with pattern 2 and is left out'],
    [
      {
        together: [
          [2, 3],
          [3, 4],
        ],
      },
      'pattern 3 stands in two groups that stay together',
    ],
    [{ together: [[2, 2]] }, 'pattern 2 stands twice in one group that stays together'],
    [{ before: [[1, 2]], leaveOut: [1] }, 'pattern 1 runs before pattern 2 and is left out'],
    [{ before: [[3, 3]] }, 'these constraints go in a circle: 3 before 3'],
    [
      {
        before: [
          [1, 2],
          [2, 5],
          [5, 1],
        ],
      },
      'these constraints go in a circle: 1 before 2, 2 before 5, 5 before 1',
    ],
    [
      {
        before: [
          [1, 5],
          [5, 2],
        ],
        together: [[2, 1]],
      },
      'these constraints go in a circle: 1 before 5, 5 before 2, 2 together with 1',
    ],
    [{ first: [1, 2, 1] }, 'pattern 1 runs first in two places'],
    [{ first: [2, 1], before: [[1, 2]] }, 'pattern 2 runs first, but pattern 1 has to run before it'],
    [{ first: [2, 1], together: [[2, 3]] }, 'pattern 1 cannot run at place 2: pattern 3 has to run there'],
  ])('%j', (changes, expected) => {
    expect(contradiction(6, changes)).toBe(expected)
  })

  test('do not arise from a pair whose second pattern is left out', () => {
    expect(delivered(3, { before: [[3, 1]], leaveOut: [1] })).toEqual([2, 3, 1])
  })
})

test('a cut lies between groups and after what is kept', () => {
  const { rules } = compile(6, { keep: [2], together: [[3, 4]], leaveOut: [6] })
  if (rules === null) throw new Error('the constraints contradict')
  // 2 | 1 | 3 4 | 5 | and 6 is left out
  expect([...cutPlaces(deliveredOrder(rules), rules)]).toEqual([0, 1, 1, 0, 1, 1, 0])
})

test('an order by hand gives way only to constraints', () => {
  const { rules } = compile(6, { keep: [2], together: [[3, 4]], leaveOut: [6], before: [[1, 5]] })
  if (rules === null) throw new Error('the constraints contradict')
  const order = handOrder(
    rules,
    [5, 4, 3].map((one) => one - 1),
  )
  expect([...order.sequence].map((pattern) => pattern + 1)).toEqual([2, 1, 5, 3, 4, 6])
  expect(order).toMatchObject({ name: 'by-hand', chosen: 5, runs: 5 })
})
