import { defineStore } from 'pinia'
import { shallowRef } from 'vue'
import type { Assumptions } from '../../app/contract/shapes/budget.ts'
import type { ProductRecord } from '../../app/contract/shapes/model.ts'
import type { Run } from '../../app/contract/shapes/run.ts'
import { api } from '../api/client.ts'
import { firstCut } from '../components/budget/first-cut.ts'
import type { CutSubject } from './dialogs.ts'

/**
 * The cut that each product was last looked at with. The Budget screen keeps it up to date; the list of lost faults,
 * reports and exports are about it. Where nothing was looked at yet it is the budget in use.
 */
export const useCutSubject = defineStore('cut-subject', () => {
  const subjects = shallowRef<ReadonlyMap<number, CutSubject>>(new Map())

  function set(productId: number, subject: CutSubject): void {
    subjects.value = new Map(subjects.value).set(productId, subject)
  }

  /** Returns the cut, or null where the product has no finished run. */
  async function get(productId: number): Promise<CutSubject | null> {
    const { product, runs, budgets } = await api.call('products.get', { id: productId })
    const isDone = (id: number): boolean => runs.some((run) => run.id === id && run.state === 'done')
    const looked = subjects.value.get(productId)
    if (looked && isDone(looked.runId)) return looked
    const usable = budgets.filter((budget) => isDone(budget.runId))
    const budget = usable.find(({ inUse }) => inUse) ?? usable[0]
    if (budget) {
      const { runId, order, cut, assumptions } = budget
      return { runId, order, cut, assumptions }
    }
    const latest = runs.find(({ state }) => state === 'done')
    return latest ? untouched(latest, product) : null
  }

  /** Products of another project have other numbers. */
  function forget(): void {
    subjects.value = new Map()
  }

  return { subjects, set, get, forget }
})

/** The cut that the Budget screen begins with. */
async function untouched(run: Run, product: ProductRecord): Promise<CutSubject> {
  const order = 'steepest'
  const assumptions: Assumptions = {
    testerId: product.testerId,
    testerValues: {},
    productValues: {},
    limits: product.limits,
    constraints: null,
    weights: null,
    n: 1,
    byHand: null,
  }
  const { view } = await api.call('budgets.view', { runId: run.id, orders: [order], assumptions })
  const columns = view?.orders[0]
  const cut = view && columns ? firstCut(view, columns) : run.patternsTotal
  return { runId: run.id, order, cut, assumptions }
}
