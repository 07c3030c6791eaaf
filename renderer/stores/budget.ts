import { defineStore } from 'pinia'
import { computed, ref, shallowRef } from 'vue'
import { AppError } from '../../app/contract/errors.ts'
import type { Assumptions, Budget, BudgetView, OrderName } from '../../app/contract/shapes/budget.ts'
import type { FieldError, ProductRecord, TesterRecord } from '../../app/contract/shapes/model.ts'
import type { OutputOf } from '../../app/contract/operations.ts'
import type { Run } from '../../app/contract/shapes/run.ts'
import { api } from '../api/client.ts'
import { clamp } from '../charts/plot-geometry.ts'
import { firstCut } from '../components/budget/first-cut.ts'
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
  const product = shallowRef<ProductRecord | null>(null)
  const runs = shallowRef<readonly Run[]>([])
  const budgets = shallowRef<readonly Budget[]>([])
  const names = shallowRef<ReadonlyMap<string, string>>(new Map())
  const testers = shallowRef<readonly TesterRecord[]>([])
  const fields = shallowRef<OutputOf<'fields.get'> | null>(null)
  const runId = ref(0)
  const order = ref<OrderName>('steepest')
  const cut = ref(0)
  const assumptions = shallowRef<Assumptions | null>(null)
  const view = shallowRef<BudgetView | null>(null)
  const fieldErrors = shallowRef<readonly FieldError[]>([])
  /** The figures shown stand on older assumptions than the fields do. */
  const isStale = ref(false)
  const problem = ref<string | null>(null)

  const columns = computed(() => view.value?.orders.find((each) => each.order === order.value) ?? null)
  const patterns = computed(() => columns.value?.patterns ?? 0)
  const run = computed(() => runs.value.find(({ id }) => id === runId.value) ?? null)
  const doneRuns = computed(() => runs.value.filter(({ state: each }) => each === 'done'))
  const inUse = computed(() => budgets.value.find((budget) => budget.inUse) ?? null)

  /** Order and cut to be shown once the figures for them are here; what was shown stays until then. */
  let coming: { readonly order: OrderName; readonly cut?: number } | null = null
  let asked = 0
  let settling: ReturnType<typeof setTimeout> | undefined

  /** Opens a product at the cut that it was last looked at with, or at one that a link names. */
  async function open(productId: number, link: Readonly<Record<string, string>> = {}): Promise<void> {
    if (product.value?.id !== productId) {
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
      await loadView()
      const ready = view.value as BudgetView | null
      if (ready === null || columns.value === null) return
      moveTo(
        link['cut'] !== undefined
          ? Number(link['cut'])
          : isKept
            ? subject.cut
            : firstCut(ready, columns.value),
      )
    } catch (error) {
      state.value = { status: 'failed', message: messageOf(error) }
    }
  }

  async function loadRecords(productId: number): Promise<void> {
    const records = await api.call('products.get', { id: productId })
    product.value = records.product
    runs.value = records.runs
    budgets.value = records.budgets
    names.value = new Map([
      ...records.netlists.map(({ id, name }) => [`netlist ${id}`, name] as const),
      ...records.patternSets.map(({ id, name }) => [`set ${id}`, name] as const),
    ])
  }

  /** "Run 14: netlist r5, pattern set B". */
  function nameOfRun({ number, netlistId, patternSetId }: Run): string {
    const netlist = names.value.get(`netlist ${netlistId}`) ?? '–'
    return `Run ${number}: netlist ${netlist}, ${names.value.get(`set ${patternSetId}`) ?? '–'}`
  }

  async function loadForms(): Promise<void> {
    testers.value = (await api.call('testers.list', {})).testers
    fields.value ??= await api.call('fields.get', {})
  }

  /** Asks for the figures; an answer that a later question has overtaken is dropped. */
  async function loadView(): Promise<void> {
    if (assumptions.value === null) return
    const mine = ++asked
    isStale.value = view.value !== null
    try {
      const answer = await api.call('budgets.view', {
        runId: runId.value,
        orders: ordersWanted(),
        assumptions: assumptions.value,
      })
      if (mine !== asked) return
      fieldErrors.value = answer.fieldErrors
      problem.value = null
      if (answer.view === null) return
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
    } catch (error) {
      if (mine !== asked) return
      problem.value = messageOf(error)
      if (view.value === null) state.value = { status: 'failed', message: messageOf(error) }
    }
  }

  function ordersWanted(): OrderName[] {
    const shown: OrderName[] = ['steepest', 'as-delivered']
    const known = view.value?.runId === runId.value ? view.value.orders.map((each) => each.order) : []
    if ([order.value, coming?.order, ...known].includes('smallest')) shown.push('smallest')
    if (assumptions.value?.byHand) shown.push('by-hand')
    return shown
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

  /** Changes what the figures stand on; they follow once the changes pause. */
  function assume(change: Partial<Assumptions>): void {
    if (assumptions.value === null) return
    assumptions.value = { ...assumptions.value, ...change }
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
    runId.value = id
    // An order by hand numbers the patterns of one set.
    if (assumptions.value?.byHand) assumptions.value = { ...assumptions.value, byHand: null }
    coming = { order: order.value === 'by-hand' ? 'steepest' : order.value }
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

  /** Moves a pattern to another position, both from 0, which makes the order one set by hand. */
  function moveByHand(from: number, to: number): void {
    const list = Array.from(columns.value?.pattern ?? [])
    const [moved] = list.splice(from, 1)
    if (moved === undefined || from === to) return
    list.splice(to, 0, moved)
    coming = { order: 'by-hand' }
    assume({ byHand: list })
  }

  return {
    state,
    product,
    runs,
    budgets,
    testers,
    fields,
    runId,
    order,
    cut,
    assumptions,
    view,
    fieldErrors,
    isStale,
    problem,
    columns,
    patterns,
    run,
    doneRuns,
    inUse,
    open,
    nameOfRun,
    loadRecords,
    loadForms,
    loadView,
    moveTo,
    assume,
    chooseOrder,
    chooseRun,
    goTo,
    moveByHand,
  }
})

function messageOf(error: unknown): string {
  if (error instanceof AppError) return error.message
  throw error
}
