import { computed, shallowRef } from 'vue'
import type { OutputOf } from '../../app/contract/operations.ts'
import type { Budget } from '../../app/contract/shapes/budget.ts'
import type { ProductRecord, TesterRecord } from '../../app/contract/shapes/model.ts'
import type { Run } from '../../app/contract/shapes/run.ts'
import { api } from '../api/client.ts'

/** What the Budget screen needs to know of its product: runs, kept budgets, names, and the testers to choose from. */
export function budgetRecords() {
  const product = shallowRef<ProductRecord | null>(null)
  const runs = shallowRef<readonly Run[]>([])
  const budgets = shallowRef<readonly Budget[]>([])
  const names = shallowRef<ReadonlyMap<string, string>>(new Map())
  const testers = shallowRef<readonly TesterRecord[]>([])
  const fields = shallowRef<OutputOf<'fields.get'> | null>(null)

  const doneRuns = computed(() => runs.value.filter(({ state }) => state === 'done'))
  const inUse = computed(() => budgets.value.find((budget) => budget.inUse) ?? null)

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

  return {
    product,
    runs,
    budgets,
    testers,
    fields,
    doneRuns,
    inUse,
    loadRecords,
    nameOfRun,
    loadForms,
  }
}
