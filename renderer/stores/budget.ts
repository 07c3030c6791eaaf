import { defineStore } from 'pinia'
import { computed, ref, shallowRef } from 'vue'
import { AppError } from '../../app/contract/errors.ts'
import type { Assumptions, Budget, BudgetView, OrderName } from '../../app/contract/shapes/budget.ts'
import type { FieldError } from '../../app/contract/shapes/model.ts'
import { api } from '../api/client.ts'
import { clamp } from '../charts/plot-geometry.ts'
import { firstCut } from '../components/budget/first-cut.ts'
import { budgetRecords } from './budget-records.ts'
import { useCutSubject } from './cut-subject.ts'

export type BudgetState =
  | { readonly status: 'idle' }
  | { readonly status: 'loading' }
  | { readonly status: 'no-run' }
  | { readonly status: 'ready' }
  | { readonly status: 'failed'; readonly message: string }

/** Changes of assumptions wait so long for the next one before figures are asked for. */
const SETTLE_MS = 120

/** The cut of one product: its run, order and assumptions, and the figures at every number of patterns. */
export const useBudget = defineStore('budget', () => {
  const subjects = useCutSubject()
  const state = shallowRef<BudgetState>({ status: 'idle' })
  const records = budgetRecords()
  const { product, runs, budgets, doneRuns, loadRecords, loadForms } = records
  const runId = ref(0)
  const order = ref<OrderName>('steepest')
  const cut = ref(0)
  const assumptions = shallowRef<Assumptions | null>(null)
  const view = shallowRef<BudgetView | null>(null)
  const fieldErrors = shallowRef<readonly FieldError[]>([])
  /** The figures shown stand on older assumptions than the fields do. */
  const isStale = ref(false)
  const problem = ref<string | null>(null)
  /** The smallest complete set is being looked for. */
  const isSearching = ref(false)

  const columns = computed(() => view.value?.orders.find((each) => each.order === order.value) ?? null)
  const patterns = computed(() => columns.value?.patterns ?? 0)
  const run = computed(() => runs.value.find(({ id }) => id === runId.value) ?? null)

  /** Order and cut to be shown once the figures for them are here; what was shown stays until then. */
  let coming: { readonly order: OrderName; readonly cut?: number } | null = null
  let asked = 0
  /** The smallest complete set is shown from when it was first asked for until its search is cancelled. */
  let wantsSmallest = false
  /** The choice that it was last found for. */
  let searched = ''
  let settling: ReturnType<typeof setTimeout> | undefined

  /** Opens a product at the cut that it was last looked at with, or at one that a link names. */
  async function open(productId: number, link: Readonly<Record<string, string>> = {}): Promise<void> {
    if (product.value?.id !== productId || state.value.status === 'no-run') {
      wantsSmallest = false
      view.value = null
      state.value = { status: 'loading' }
    }
    try {
      await Promise.all([loadRecords(productId), loadForms()])
      const subject = await subjects.get(productId)
      if (subject === null) {
        state.value = { status: 'no-run' }
        return
      }
      const linked = doneRuns.value.find(({ id }) => id === Number(link['run']))
      runId.value = linked?.id ?? subject.runId
      order.value = subject.order
      assumptions.value = subject.assumptions
      const isKept =
        subjects.subjects.has(productId) || budgets.value.some((each) => each.runId === runId.value)
      const wanted = link['cut'] !== undefined ? Number(link['cut']) : isKept ? subject.cut : null
      // What is shown already can be moved at once: figures that come later leave the cut where it is then.
      const isShown = view.value?.runId === runId.value
      if (isShown && wanted !== null) moveTo(wanted)
      await loadView()
      const ready = view.value as BudgetView | null
      if (isShown || ready === null || columns.value === null) return
      moveTo(wanted ?? firstCut(ready, columns.value))
    } catch (error) {
      state.value = { status: 'failed', message: messageOf(error) }
    }
  }

  /**
   * Asks for the figures. Where the smallest complete set has to be looked for anew, which takes long, the other orders
   * come first, unless it is the one that is shown.
   */
  async function loadView(): Promise<void> {
    if (assumptions.value === null) return
    isStale.value = view.value !== null
    const isShown = (coming?.order ?? order.value) === 'smallest'
    wantsSmallest ||= isShown
    if (!wantsSmallest || (!isShown && searched !== choiceKey())) {
      const isCurrent = await ask(quickOrders())
      if (!wantsSmallest || !isCurrent) return
    }
    isSearching.value = searched !== choiceKey()
    await ask([...quickOrders(), 'smallest'])
  }

  /** Returns whether what is shown is now the answer; one that a later question has overtaken is dropped. */
  async function ask(orders: OrderName[]): Promise<boolean> {
    if (assumptions.value === null) return false
    const mine = ++asked
    const choice = choiceKey()
    try {
      const answer = await api.call('budgets.view', {
        runId: runId.value,
        orders,
        assumptions: assumptions.value,
      })
      if (mine !== asked) return false
      isSearching.value = false
      fieldErrors.value = answer.fieldErrors
      problem.value = null
      if (answer.view === null) return false
      if (answer.view.smallest) searched = choice
      view.value = answer.view
      if (coming !== null) {
        order.value = coming.order
        cut.value = coming.cut ?? cut.value
        coming = null
      }
      isStale.value = false
      cut.value = clamp(cut.value, 0, patterns.value)
      state.value = { status: 'ready' }
      remember()
      return true
    } catch (error) {
      if (mine !== asked) return false
      isSearching.value = false
      coming = null
      const message = messageOf(error)
      if (orders.includes('smallest') && (error as AppError).code === 'cancelled')
        return goOnWithoutSmallest()
      problem.value = message
      if (view.value === null) state.value = { status: 'failed', message }
      return false
    }
  }

  /** Looks on for a smaller complete set; what is shown follows when it ends. */
  async function searchLonger(seconds: number): Promise<void> {
    if (assumptions.value === null || isSearching.value) return
    isSearching.value = true
    try {
      await api.call('budgets.smallest', { runId: runId.value, assumptions: assumptions.value, seconds })
      await loadView()
    } catch (error) {
      if ((error as AppError).code !== 'cancelled') problem.value = messageOf(error)
    } finally {
      isSearching.value = false
    }
  }

  function goOnWithoutSmallest(): Promise<boolean> {
    wantsSmallest = false
    if (order.value === 'smallest') order.value = 'steepest'
    return ask(quickOrders())
  }

  function quickOrders(): OrderName[] {
    return ['steepest', 'as-delivered', ...(assumptions.value?.byHand ? (['by-hand'] as const) : [])]
  }

  /** What the smallest complete set depends on. */
  function choiceKey(): string {
    const { constraints, weights, n } = assumptions.value ?? {}
    return JSON.stringify([runId.value, constraints, weights, n])
  }

  function moveTo(next: number): void {
    if (!Number.isFinite(next)) return
    cut.value = clamp(Math.round(next), 0, patterns.value)
    remember()
  }

  function remember(): void {
    if (product.value === null || assumptions.value === null || view.value === null) return
    subjects.set(product.value.id, {
      runId: runId.value,
      order: order.value,
      cut: cut.value,
      assumptions: assumptions.value,
    })
  }

  /** Changes what the figures stand on, and which order and cut are shown; they follow once the changes pause. */
  function assume(
    change: Partial<Assumptions>,
    shown: { readonly order?: OrderName; readonly cut?: number } = {},
  ): void {
    if (assumptions.value === null) return
    assumptions.value = { ...assumptions.value, ...change }
    if (shown.order !== undefined || shown.cut !== undefined) coming = { order: order.value, ...shown }
    isStale.value = true
    clearTimeout(settling)
    settling = setTimeout(() => void loadView(), SETTLE_MS)
  }

  async function chooseOrder(next: OrderName): Promise<void> {
    if (view.value?.orders.some((each) => each.order === next)) {
      coming = null
      order.value = next
      remember()
    } else {
      coming = { order: next }
      await loadView()
    }
  }

  async function chooseRun(id: number): Promise<void> {
    const setOf = (each: number): number | undefined =>
      runs.value.find((one) => one.id === each)?.patternSetId
    const isOtherSet = setOf(id) !== setOf(runId.value)
    runId.value = id
    // An order by hand and constraints number the patterns of one set.
    if (isOtherSet && assumptions.value !== null) {
      assumptions.value = { ...assumptions.value, byHand: null, constraints: null }
    }
    coming = { order: isOtherSet && order.value === 'by-hand' ? 'steepest' : order.value }
    await loadView()
  }

  /** Goes to a kept budget: its run, order, assumptions and cut. */
  async function goTo(budget: Budget): Promise<void> {
    if (!doneRuns.value.some(({ id }) => id === budget.runId)) return
    runId.value = budget.runId
    assumptions.value = budget.assumptions
    coming = { order: budget.order, cut: budget.cut }
    await loadView()
  }

  return {
    state,
    ...records,
    runId,
    order,
    cut,
    assumptions,
    view,
    fieldErrors,
    isStale,
    problem,
    isSearching,
    columns,
    patterns,
    run,
    open,
    loadView,
    searchLonger,
    moveTo,
    assume,
    chooseOrder,
    chooseRun,
    goTo,
  }
})

function messageOf(error: unknown): string {
  if (error instanceof AppError) return error.message
  throw error
}
