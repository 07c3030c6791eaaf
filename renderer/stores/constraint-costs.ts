import { defineStore } from 'pinia'
import { computed, shallowRef, watch } from 'vue'
import { AppError } from '../../app/contract/errors.ts'
import type { ConstraintCosts } from '../../app/contract/shapes/budget.ts'
import { api } from '../api/client.ts'
import { useBudget } from './budget.ts'

/** The cut has to rest so long before the costs are asked for. */
const REST_MS = 400

/** What each kind of constraint costs at the cut; null until it is known for this very cut. */
export const useConstraintCosts = defineStore('constraint-costs', () => {
  const budget = useBudget()
  const known = shallowRef<{ readonly key: string; readonly costs: ConstraintCosts } | null>(null)
  const key = computed(() => {
    const { constraints, weights, n } = budget.assumptions ?? {}
    return JSON.stringify([budget.runId, budget.order, budget.cut, constraints, weights, n])
  })
  const costs = computed(() => (known.value?.key === key.value ? known.value.costs : null))
  const problem = shallowRef('')

  let resting: ReturnType<typeof setTimeout> | undefined
  let isAsking = false

  /** Keeps the costs up to date until the returned function is called; one question at a time. */
  function follow(): () => void {
    const stop = watch(
      () => [key.value, budget.isStale],
      () => {
        clearTimeout(resting)
        if (budget.assumptions?.constraints && !budget.isStale && costs.value === null) {
          resting = setTimeout(() => void load(), REST_MS)
        }
      },
      { immediate: true },
    )
    return () => {
      clearTimeout(resting)
      stop()
    }
  }

  async function load(): Promise<void> {
    if (isAsking || budget.assumptions === null) return
    isAsking = true
    const mine = key.value
    try {
      const answer = await api.call('budgets.constraintCosts', {
        runId: budget.runId,
        order: budget.order,
        cut: budget.cut,
        assumptions: budget.assumptions,
      })
      known.value = { key: mine, costs: answer }
      problem.value = ''
    } catch (error) {
      if (!(error instanceof AppError)) throw error
      problem.value = error.code === 'cancelled' ? 'What they cost was not worked out.' : error.message
      return
    } finally {
      isAsking = false
    }
    if (mine !== key.value && budget.assumptions.constraints && !budget.isStale) await load()
  }

  return { costs, problem, follow }
})
