import { defineStore } from 'pinia'
import { computed, shallowRef } from 'vue'
import { AppError } from '../../app/contract/errors.ts'
import type { Assumptions, ImprovedChoice, OrderName } from '../../app/contract/shapes/budget.ts'
import { api } from '../api/client.ts'
import { useBudget } from './budget.ts'
import { useChoice } from './choice.ts'
import { useTasks } from './tasks.ts'

/** What a search is or was about. */
export type ImprovementSubject = {
  readonly productId: number
  readonly runId: number
  readonly order: OrderName
  readonly cut: number
  readonly assumptions: Assumptions
  readonly within: 'patterns' | 'cycles'
  readonly seconds: number
}

export type ImprovementState =
  | { readonly status: 'idle' }
  | { readonly status: 'running'; readonly subject: ImprovementSubject }
  | { readonly status: 'done'; readonly subject: ImprovementSubject; readonly found: ImprovedChoice }
  | { readonly status: 'failed'; readonly message: string }

/** The search for a better choice at the cut: it goes on whatever is looked at meanwhile. */
export const useImprovement = defineStore('improvement', () => {
  const budget = useBudget()
  const choice = useChoice()
  const tasks = useTasks()
  const state = shallowRef<ImprovementState>({ status: 'idle' })
  /** Its task, for progress and cancel. */
  const task = computed(() =>
    state.value.status === 'running' ? (tasks.running.find(({ kind }) => kind === 'improve') ?? null) : null,
  )

  async function search(within: 'patterns' | 'cycles', seconds: number): Promise<void> {
    const { product, assumptions, runId, order, cut } = budget
    if (product === null || assumptions === null || state.value.status === 'running') return
    const subject = { productId: product.id, runId, order, cut, assumptions, within, seconds }
    state.value = { status: 'running', subject }
    try {
      const found = await api.call('budgets.improve', { runId, order, cut, assumptions, within, seconds })
      state.value = { status: 'done', subject, found }
    } catch (error) {
      if (!(error instanceof AppError)) throw error
      state.value =
        error.code === 'cancelled' ? { status: 'idle' } : { status: 'failed', message: error.message }
    }
  }

  async function cancel(): Promise<void> {
    if (task.value !== null) await tasks.cancel(task.value.id)
  }

  /** True where what was found is of the run and the constraints that are shown now. */
  const fits = computed(() => {
    if (state.value.status !== 'done') return false
    const { subject } = state.value
    const { constraints, weights, n } = subject.assumptions
    const now = budget.assumptions
    return (
      subject.runId === budget.runId &&
      JSON.stringify([constraints, weights, n]) === JSON.stringify([now?.constraints, now?.weights, now?.n])
    )
  })

  /** Makes the better choice the order by hand and puts the cut behind it. */
  async function takeOver(): Promise<void> {
    if (state.value.status !== 'done' || !fits.value) return
    const { found } = state.value
    await choice.change('Better choice', { byHand: found.order }, { order: 'by-hand', cut: found.cut })
    state.value = { status: 'idle' }
  }

  function forget(): void {
    if (state.value.status !== 'running') state.value = { status: 'idle' }
  }

  return { state, task, fits, search, cancel, takeOver, forget }
})
