import { beforeEach, expect, test, vi } from 'vitest'
import { AppError } from '../../../app/contract/errors.ts'
import type { Assumptions } from '../../../app/contract/shapes/budget.ts'
import { useChoice } from '../../../renderer/stores/choice.ts'
import { useConstraintCosts } from '../../../renderer/stores/constraint-costs.ts'
import { useCutSubject } from '../../../renderer/stores/cut-subject.ts'
import { useImprovement } from '../../../renderer/stores/improvement.ts'
import { useUndo } from '../../../renderer/stores/undo.ts'
import { openBudget, viewOf } from '../../helpers/open-budget.ts'

type Opened = Awaited<ReturnType<typeof openBudget>>
let { host, budget }: Opened = {} as Opened
beforeEach(async () => ({ host, budget } = await openBudget()))

const KEPT = { keep: [4], leaveOut: [], together: [], before: [], first: [] }
const asked = (name: string) => host.asked.filter((each) => each.name === name)
const lastAssumptions = () =>
  (asked('budgets.view').at(-1)?.input as { assumptions: Assumptions }).assumptions
const settled = () => vi.waitFor(() => expect(budget.isStale).toBe(false))

test('constraints are asked with, and can be taken back and done again', async () => {
  const choice = useChoice()
  const undo = useUndo()
  await choice.change('Constraints', { constraints: KEPT })
  await settled()
  expect(lastAssumptions().constraints).toEqual(KEPT)
  expect(undo.undoLabel).toBe('Constraints')
  await undo.undo()
  await settled()
  expect(budget.assumptions?.constraints).toBeNull()
  expect(lastAssumptions().constraints).toBeNull()
  await undo.redo()
  expect(budget.assumptions?.constraints).toEqual(KEPT)
})

test('an order by hand that is taken back leads to the order and cut before it', async () => {
  const choice = useChoice()
  budget.moveTo(20)
  await choice.moveByHand(19, 18, 19)
  await settled()
  expect([budget.order, budget.cut]).toEqual(['by-hand', 19])
  expect(lastAssumptions().byHand?.slice(17, 20)).toEqual([83, 81, 82])
  await useUndo().undo()
  await settled()
  expect([budget.order, budget.cut, budget.assumptions?.byHand]).toEqual(['steepest', 20, null])
})

test('a change taken back while another product is looked at reaches the product that it was made on', async () => {
  await useChoice().change('Constraints', { constraints: KEPT })
  await settled()
  budget.product = { ...budget.product!, id: 2 }
  await useUndo().undo()
  expect(budget.assumptions?.constraints).toEqual(KEPT)
  expect(useCutSubject().subjects.get(1)?.assumptions.constraints).toBeNull()
})

test('constraints stay with runs of their pattern set and are left behind by runs of another', async () => {
  await useChoice().change('Constraints', { constraints: KEPT })
  await budget.chooseRun(2)
  expect(budget.assumptions?.constraints).toEqual(KEPT)
  await budget.chooseRun(3)
  expect(budget.assumptions?.constraints).toBeNull()
})

test('what a better choice gained can be taken over only where it belongs, and taken back', async () => {
  const improvement = useImprovement()
  host.answers['budgets.improve'] = () => ({
    order: [5, 3, 1],
    cut: 2,
    detected: 12,
    before: 10,
    steepest: 10,
    bound: 12,
    proven: true,
    seconds: 1,
  })
  await improvement.search('patterns', 20)
  expect(asked('budgets.improve').at(-1)?.input).toMatchObject({ cut: 10, within: 'patterns', seconds: 20 })
  expect(improvement.fits).toBe(true)
  budget.assume({ n: 2 })
  expect(improvement.fits).toBe(false)
  await improvement.takeOver()
  expect(budget.assumptions?.byHand).toBeNull()
  budget.assume({ n: 1 })
  await improvement.takeOver()
  await settled()
  expect([budget.order, budget.cut, budget.assumptions?.byHand]).toEqual(['by-hand', 2, [5, 3, 1]])
  await useUndo().undo()
  await settled()
  expect([budget.order, budget.cut]).toEqual(['steepest', 10])
})

test('the other orders come first while the smallest complete set is looked for anew', async () => {
  const orders = () =>
    asked('budgets.view').map(({ input }) => (input as { orders: string[] }).orders.includes('smallest'))
  host.answers['budgets.view'] = ({ orders: wanted }) => ({
    view: viewOf(wanted, {
      smallest: wanted.includes('smallest') ? { patterns: 9, lowerBound: 8, proven: false } : null,
    }),
    fieldErrors: [],
  })
  await budget.chooseOrder('smallest')
  expect(budget.view?.smallest?.patterns).toBe(9)
  await budget.chooseOrder('steepest')
  const before = orders().length
  await useChoice().change('Constraints', { constraints: KEPT })
  await vi.waitFor(() => expect(orders().slice(before)).toEqual([false, true]))
  budget.assume({ productValues: { yield: 0.5 } })
  await vi.waitFor(() => expect(orders().slice(before)).toEqual([false, true, true]))
})

test('a search for the smallest set that is cancelled goes back to the steepest first', async () => {
  host.answers['budgets.view'] = ({ orders }) => {
    if (orders.includes('smallest')) throw new AppError('cancelled')
    return { view: viewOf(orders), fieldErrors: [] }
  }
  await budget.chooseOrder('smallest')
  expect([budget.order, budget.problem, budget.isStale, budget.isSearching]).toEqual([
    'steepest',
    null,
    false,
    false,
  ])
})

test('costs are asked for once the cut rests, and belong to that cut alone', async () => {
  host.answers['budgets.constraintCosts'] = () => ({
    detected: 10,
    rows: [{ kind: 'keep', cost: 3, isInTheWay: false }],
  })
  const costs = useConstraintCosts()
  const stop = costs.follow()
  await useChoice().change('Constraints', { constraints: KEPT })
  await vi.waitFor(() => expect(costs.costs?.rows[0]?.cost).toBe(3))
  for (const cut of [11, 12, 13]) budget.moveTo(cut)
  expect(costs.costs).toBeNull()
  await vi.waitFor(() => expect(costs.costs?.rows[0]?.cost).toBe(3))
  expect(asked('budgets.constraintCosts').map(({ input }) => (input as { cut: number }).cut)).toEqual([
    10, 13,
  ])
  stop()
})
