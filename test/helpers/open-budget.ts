import type { Assumptions, BudgetView, OrderName } from '../../app/contract/shapes/budget.ts'
import type { Run } from '../../app/contract/shapes/run.ts'
import { useBudget } from '../../renderer/stores/budget.ts'
import { useCutSubject } from '../../renderer/stores/cut-subject.ts'
import { budgetView, orderColumns } from './budget-columns.ts'
import { fakeApi, type FakeApi } from './fake-api.ts'

const NO_LIMITS = { maxMilliseconds: null, minCoverage: null, maxDppm: null }

export const PLAIN_ASSUMPTIONS: Assumptions = {
  testerId: null,
  testerValues: {},
  productValues: {},
  limits: NO_LIMITS,
  constraints: null,
  weights: null,
  n: 1,
  byHand: null,
}

function doneRun(id: number, patternSetId: number): Run {
  return {
    id,
    productId: 1,
    number: id,
    netlistId: 1,
    patternSetId,
    state: 'done',
    detectionLimit: 0,
    createdAtMs: 0,
    endedAtMs: 1,
    patternsDone: 100,
    patternsTotal: 100,
    progress: 1,
    seconds: 1,
    figures: null,
    reason: null,
    engine: 'Tallycut',
  }
}

/** A view of the orders that are asked for. */
export function viewOf(orders: readonly OrderName[], changes: Partial<BudgetView> = {}): BudgetView {
  return budgetView(100, {
    orders: orders.map((order) => orderColumns(order, 100, order === 'as-delivered' ? 20 : 8)),
    markers: [],
    ...changes,
  })
}

/** A fake host with two runs of one pattern set and one of another, and the first of them on the Budget screen. */
export async function openBudget(): Promise<{ host: FakeApi; budget: ReturnType<typeof useBudget> }> {
  const host = fakeApi({
    'products.get': () => ({
      product: {
        id: 1,
        name: 'Fern',
        note: '',
        createdAtMs: 0,
        values: {},
        limits: NO_LIMITS,
        testerId: null,
      },
      netlists: [],
      patternSets: [],
      runs: [doneRun(1, 1), doneRun(2, 1), doneRun(3, 2)],
      budgets: [],
    }),
    'testers.list': () => ({ testers: [] }),
    'fields.get': () => ({ product: [], tester: [] }),
    'budgets.view': ({ orders }) => ({ view: viewOf(orders), fieldErrors: [] }),
  })
  useCutSubject().set(1, { runId: 1, order: 'steepest', cut: 10, assumptions: PLAIN_ASSUMPTIONS })
  const budget = useBudget()
  await budget.open(1)
  return { host, budget }
}
