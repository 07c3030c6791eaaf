import { defineStore } from 'pinia'
import { shallowRef } from 'vue'
import { api } from '../api/client.ts'
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
    const budget = usable.find(({ inUse }) => inUse) ?? usable.at(-1)
    if (budget) {
      const { runId, order, cut, assumptions } = budget
      return { runId, order, cut, assumptions }
    }
    const latest = runs.filter(({ state }) => state === 'done').sort((a, b) => b.number - a.number)[0]
    if (!latest) return null
    const assumptions = {
      testerId: product.testerId,
      testerValues: {},
      productValues: {},
      limits: product.limits,
      constraints: null,
      weights: null,
      n: 1,
      byHand: null,
    }
    return { runId: latest.id, order: 'steepest', cut: latest.patternsTotal, assumptions }
  }

  /** Products of another project have other numbers. */
  function forget(): void {
    subjects.value = new Map()
  }

  return { subjects, set, get, forget }
})
