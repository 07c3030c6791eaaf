import { defineStore } from 'pinia'
import { computed, shallowRef } from 'vue'
import { AppError } from '../../app/contract/errors.ts'
import type { Assumptions, Ceiling } from '../../app/contract/shapes/budget.ts'
import { api } from '../api/client.ts'
import { useBudget } from './budget.ts'
import { useNotices } from './notices.ts'
import { useTasks } from './tasks.ts'

/** The proven ceiling of what the Budget screen shows, while run, constraints, weights and detections stay the same. */
export const useCeiling = defineStore('ceiling', () => {
  const budget = useBudget()
  const tasks = useTasks()
  const notices = useNotices()
  const proven = shallowRef<ReadonlyMap<string, Ceiling>>(new Map())
  const proving = shallowRef<string | null>(null)

  const key = computed(() => (budget.assumptions ? keyOf(budget.runId, budget.assumptions) : ''))
  const ceiling = computed(() => proven.value.get(key.value) ?? null)
  const isProving = computed(() => proving.value !== null)
  /** Its task, for progress and cancel. */
  const task = computed(() =>
    isProving.value ? (tasks.running.find(({ kind }) => kind === 'ceiling') ?? null) : null,
  )

  async function prove(): Promise<void> {
    if (budget.assumptions === null || isProving.value) return
    const mine = key.value
    proving.value = mine
    try {
      const answer = await api.call('budgets.ceiling', {
        runId: budget.runId,
        assumptions: budget.assumptions,
      })
      proven.value = new Map(proven.value).set(mine, answer)
    } catch (error) {
      if (!(error instanceof AppError)) throw error
      if (error.code !== 'cancelled') notices.tell('bad', 'No ceiling was proven', error.message)
    } finally {
      proving.value = null
    }
  }

  async function cancel(): Promise<void> {
    if (task.value !== null) await tasks.cancel(task.value.id)
  }

  return { ceiling, isProving, task, prove, cancel }
})

/** What a ceiling depends on; money, time and limits are not in it. */
function keyOf(runId: number, { constraints, weights, n }: Assumptions): string {
  return JSON.stringify([runId, constraints, weights, n])
}
