import { describe, expect, test } from 'vitest'
import type { InputOf } from '../../app/contract/operations.ts'
import type { OrderName } from '../../app/contract/shapes/budget.ts'
import {
  adderProject,
  NO_LIMITS,
  testApplication,
  type TestApplication,
} from '../helpers/test-application.ts'

const ASSUMPTIONS = { testerId: null, limits: NO_LIMITS }
const PATTERNS = 8

type Asked = Partial<InputOf<'budgets.view'>['assumptions']>

async function finished() {
  const application = testApplication()
  const { productId, netlistId, patternSetId } = await adderProject(application)
  const { id: runId } = await application.call('runs.start', { netlistId, patternSetId })
  await application.ended(productId, runId)
  const view = async (orders: OrderName[], asked: Asked = {}) =>
    application.call('budgets.view', { runId, orders, assumptions: { ...ASSUMPTIONS, ...asked } })
  return { application, productId, runId, view }
}

function subsetsOf(size: number): number[][] {
  return Array.from({ length: 2 ** PATTERNS }, (_, bits) =>
    Array.from({ length: PATTERNS }, (__, at) => at + 1).filter((pattern) => (bits >> (pattern - 1)) & 1),
  ).filter((subset) => subset.length === size)
}

/** What each choice of so many patterns detects, asked one by one: the outside check of every search. */
async function enumerate(
  view: Awaited<ReturnType<typeof finished>>['view'],
  size: number,
): Promise<{ subset: number[]; detected: number }[]> {
  const all: { subset: number[]; detected: number }[] = []
  for (const subset of subsetsOf(size)) {
    const answer = await view(['by-hand'], { byHand: subset })
    all.push({ subset, detected: answer.view?.orders[0]?.detected[size] ?? NaN })
  }
  return all
}

describe('constraints', () => {
  test('every order respects them, and tells at which cuts they are kept', async () => {
    const { view } = await finished()
    const constraints = {
      keep: [4],
      leaveOut: ['7-8'],
      together: [[1, 3]],
      before: [[5, 2] as [number, number]],
    }
    const answer = await view(['as-delivered', 'steepest', 'smallest', 'by-hand'], {
      constraints,
      byHand: [8, 2, 1],
    })
    expect(answer.fieldErrors).toEqual([])
    for (const { order, pattern, mayCut, detected } of answer.view?.orders ?? []) {
      const list = [...pattern]
      expect([order, list.slice(-2).sort()]).toEqual([order, [7, 8]])
      expect(list.indexOf(3)).toBe(list.indexOf(1) + 1)
      expect(list.indexOf(5)).toBeLessThan(list.indexOf(2))
      for (let k = 0; k <= PATTERNS; k++) {
        const run = list.slice(0, k)
        const isRespected =
          run.includes(4) && run.includes(1) === run.includes(3) && !run.includes(7) && !run.includes(8)
        expect([order, k, mayCut[k]]).toEqual([order, k, isRespected ? 1 : 0])
      }
      // What is left out detects nothing, though it stands at the end of the list.
      expect(detected[8]).toBe(detected[6])
    }
  })

  test('the ceiling falls to what can still be chosen, and no order is above it', async () => {
    const { application, runId, view } = await finished()
    const constraints = { leaveOut: ['5-8'] }
    const assumptions = { ...ASSUMPTIONS, constraints }
    const { ceiling } = await application.call('budgets.ceiling', { runId, assumptions })
    const answer = await view(['as-delivered', 'steepest'], { constraints })
    for (const { detected } of answer.view?.orders ?? []) {
      detected.forEach((count, k) => expect(count).toBeLessThanOrEqual(ceiling[k] ?? 0))
      expect(ceiling[8]).toBe(detected[4])
    }
  })

  test('those that can not hold are refused at their field, with the reason', async () => {
    const { view } = await finished()
    const refused: readonly (readonly [object, string, string])[] = [
      [{ keep: [9] }, 'keep', 'has no pattern 9'],
      [{ keep: [2], leaveOut: [1, 2] }, 'keep', 'kept and left out'],
      [{ together: [[1, 2], ['2-3']] }, 'together', 'two groups'],
      [
        {
          before: [
            [1, 2],
            [2, 3],
            [3, 1],
          ],
        },
        'before',
        '1 before 2, 2 before 3, 3 before 1',
      ],
      [{ before: [[1, 2]], first: [2] }, 'first', 'has to run before it'],
      [{ leaveOut: ['a'] }, 'leaveOut', 'a pattern number or a range'],
    ]
    for (const [constraints, kind, words] of refused) {
      const { fieldErrors } = await view(['steepest'], { constraints: constraints as Asked['constraints'] })
      expect(fieldErrors).toEqual([{ key: `constraints.${kind}`, message: expect.stringContaining(words) }])
    }
  })

  test('each kind has its cost at the cut, never more than all choices together show', async () => {
    const { application, runId, view } = await finished()
    const all = await enumerate(view, 3)
    const best = Math.max(...all.map(({ detected }) => detected))
    const worst = [...all].sort((a, b) => a.detected - b.detected)[0]?.subset ?? []
    const constraints = { keep: worst.slice(0, 2), before: [[1, 2] as [number, number]] }
    const costs = (cut: number) =>
      application.call('budgets.constraintCosts', {
        runId,
        order: 'steepest',
        cut,
        assumptions: { ...ASSUMPTIONS, constraints },
      })
    const { detected, rows } = await costs(3)
    expect(rows.map(({ kind }) => kind)).toEqual(['keep', 'before'])
    const bestKept = Math.max(
      ...all
        .filter(({ subset }) => constraints.keep.every((pattern) => subset.includes(pattern)))
        .map((each) => each.detected),
    )
    expect(detected).toBeLessThanOrEqual(bestKept)
    for (const { cost } of rows) expect(detected + cost).toBeLessThanOrEqual(best)
    expect(rows[0]?.cost).toBeGreaterThan(0)
    // One pattern is too few for two that are kept.
    expect((await costs(1)).rows[0]).toMatchObject({ kind: 'keep', isInTheWay: true })
    const tasks = (await application.call('tasks.list', {})).tasks.filter(({ kind }) => kind === 'order')
    expect(tasks.map(({ state }) => state)).toEqual(['done'])
  })
})

describe('a better choice at a cut', () => {
  const improve = (
    { call }: TestApplication,
    runId: number,
    input: Partial<InputOf<'budgets.improve'>> = {},
  ) => call('budgets.improve', { runId, order: 'as-delivered', cut: 3, assumptions: ASSUMPTIONS, ...input })

  test.each(['patterns', 'cycles'] as const)(
    'is the best of all choices within as many %s',
    async (within) => {
      const { application, runId, view } = await finished()
      const all = await enumerate(view, 3)
      const best = Math.max(...all.map(({ detected }) => detected))
      const found = await improve(application, runId, { within })
      expect(found).toMatchObject({ detected: best, bound: best, proven: true, cut: 3 })
      expect(found.before).toBe(all.find(({ subset }) => subset.join() === '1,2,3')?.detected)
      // Taken over as an order by hand it detects at its cut what was said of it.
      const taken = await view(['by-hand'], { byHand: found.order })
      expect(taken.view?.orders[0]?.detected[found.cut]).toBe(best)
      expect(
        (await application.call('tasks.list', {})).tasks.find(({ kind }) => kind === 'improve'),
      ).toMatchObject({
        state: 'done',
        title: 'Better choice of 3 patterns for run 1',
      })
    },
  )

  test('respects the constraints, and refuses a cut that does not', async () => {
    const { application, runId, view } = await finished()
    const constraints = { keep: [8], leaveOut: [1] }
    const assumptions = { ...ASSUMPTIONS, constraints }
    const all = await enumerate(view, 3)
    const best = Math.max(
      ...all.filter(({ subset }) => subset.includes(8) && !subset.includes(1)).map((each) => each.detected),
    )
    const found = await improve(application, runId, { order: 'steepest', assumptions })
    expect(found.detected).toBe(best)
    expect(found.order.slice(0, 3)).toContain(8)
    expect(found.order).not.toContain(1)
    await expect(
      improve(application, runId, { assumptions: { ...ASSUMPTIONS, constraints: { keep: [2, 3] } }, cut: 1 }),
    ).rejects.toMatchObject({
      code: 'bad-input',
      message: expect.stringContaining('against the constraints'),
    })
  })
})

describe('the smallest complete set', () => {
  test('comes with what is proven of it, and is no larger than any choice that detects as much', async () => {
    const { application, runId, view } = await finished()
    const { smallest, orders } = (await view(['smallest'])).view ?? {}
    expect(smallest).toMatchObject({ proven: true, patterns: orders?.[0]?.chosen })
    const size = smallest?.patterns ?? 0
    expect(smallest?.lowerBound).toBe(size)
    const fewer = await enumerate(view, size - 1)
    expect(Math.max(...fewer.map(({ detected }) => detected))).toBeLessThan(32)
    const longer = await application.call('budgets.smallest', { runId, assumptions: ASSUMPTIONS, seconds: 5 })
    expect(longer).toEqual(smallest)
  })
})

test('weights: weighted and plain coverage stand side by side', async () => {
  const { view } = await finished()
  const answer = await view(['as-delivered'], { weights: 'block,weight\nsum,3\n' })
  const plain = await view(['as-delivered'])
  expect([answer.view?.isWeighted, plain.view?.isWeighted]).toEqual([true, false])
  expect(answer.view?.total).toBeGreaterThan(32)
  expect([...(answer.view?.orders[0]?.detectedPlain ?? [])]).toEqual([
    ...(plain.view?.orders[0]?.detected ?? []),
  ])
  expect(answer.view?.orders[0]?.detected.at(-1)).toBe(answer.view?.total)
})

test('a budget with constraints, weights, detections and an order by hand shows again exactly', async () => {
  const { application, productId, runId, view } = await finished()
  const assumptions = {
    ...ASSUMPTIONS,
    constraints: {
      keep: [4],
      leaveOut: ['7-8'],
      together: [],
      before: [[5, '1-2'] as [number, string]],
      first: [6],
    },
    weights: 'sum,2.5\ncarry,0\n',
    n: 2,
    byHand: [3, 5, 1, 2],
    productValues: { yield: 0.9 },
  }
  const before = (await view(['by-hand', 'steepest'], assumptions)).view
  const saved = await application.call('budgets.save', {
    productId,
    runId,
    name: 'All of it',
    order: 'by-hand',
    cut: 4,
    assumptions,
  })
  await application.call('projects.close', {})
  const [recent] = (await application.call('projects.recent', {})).projects
  await application.call('projects.open', { path: recent?.path ?? '' })
  const { budgets } = await application.call('products.get', { id: productId })
  expect(budgets[0]).toEqual(saved)
  expect(budgets[0]?.assumptions).toMatchObject(assumptions)
  const after = (await view(['by-hand', 'steepest'], budgets[0]?.assumptions)).view
  expect(after).toEqual(before)
  expect(saved.figures.detected).toBe(before?.orders[0]?.detectedN[4])
})
