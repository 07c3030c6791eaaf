import { computed, nextTick, ref, type Ref, watch } from 'vue'
import { formats } from '../../formats.ts'
import { useBudget } from '../../stores/budget.ts'
import { detectedColumn } from './cut-figures.ts'
import { sortedRows, type SortKey } from './pattern-rows.ts'

/** Height of a row in pixels, as the style has it. */
export const ROW = 27
const SPARE = 6

/** Single patterns change the escape rate by less than a whole part in a million. */
const tenths = new Intl.NumberFormat(navigator.language || 'en', {
  minimumFractionDigits: 1,
  maximumFractionDigits: 1,
})

export type PatternRow = {
  readonly row: number
  /** Position in the order, from 0. */
  readonly at: number
  readonly cells: readonly string[]
  /** Length of the gain's bar in %, on a logarithmic scale. */
  readonly bar: number
}

/** The rows of the pattern table that are in view; there may be 100,000 of them, so no others exist. */
export function usePatternWindow(scroller: Readonly<Ref<HTMLElement | null>>, n: () => number) {
  const budget = useBudget()
  const top = ref(0)
  const height = ref(240)
  const wanted = ref('')
  const sort = ref<{ readonly key: SortKey; readonly isDown: boolean }>({ key: 'position', isDown: false })

  const detected = computed(() =>
    budget.columns ? detectedColumn(budget.columns, n()) : new Float64Array(1),
  )
  /** Positions, from 0, in the order of the rows; null: as they are applied. */
  const rows = computed(() =>
    budget.columns ? sortedRows(budget.columns, detected.value, sort.value, wanted.value) : null,
  )
  const count = computed(() => rows.value?.length ?? budget.patterns)
  const first = computed(() => Math.max(0, Math.floor(top.value / ROW) - SPARE))
  const last = computed(() => Math.min(count.value, Math.ceil((top.value + height.value) / ROW) + SPARE))
  const largestGain = computed(() => {
    let most = 1
    for (let at = 0; at < detected.value.length - 1; at++) most = Math.max(most, gainAt(at))
    return most
  })
  const visible = computed(() =>
    Array.from({ length: Math.max(0, last.value - first.value) }, (_, index) => rowAt(first.value + index)),
  )

  function gainAt(at: number): number {
    return (detected.value[at + 1] ?? 0) - (detected.value[at] ?? 0)
  }

  function rowAt(row: number): PatternRow {
    const { columns, view } = budget
    const at = rows.value?.[row] ?? row
    const gain = gainAt(at)
    const alone = columns?.detectsAlone[at] ?? 0
    return {
      row,
      at,
      cells: [
        formats.count(at + 1).value,
        formats.count(columns?.pattern[at]).value,
        formats.count(gain).value,
        formats.coverageInTable((detected.value[at + 1] ?? 0) / (view?.total ?? 1)),
        formats.milliseconds(columns?.milliseconds[at + 1]).value,
        tenths.format(columns?.dppm[at + 1] ?? NaN),
        alone === 0 ? '–' : formats.count(alone).value,
      ],
      bar: gain <= 0 ? 0 : (100 * Math.log(1 + gain)) / Math.log(1 + largestGain.value),
    }
  }

  function seen(): void {
    if (!scroller.value) return
    top.value = scroller.value.scrollTop
    height.value = scroller.value.clientHeight
  }

  function sortBy(key: SortKey): void {
    const isAgain = sort.value.key === key
    sort.value = { key, isDown: isAgain ? !sort.value.isDown : key !== 'position' && key !== 'pattern' }
  }

  /** The row that shows the pattern at the cut; −1 where none does. */
  const cutRow = computed(() => (rows.value === null ? budget.cut - 1 : rows.value.indexOf(budget.cut - 1)))

  /** Puts the cut at a neighbouring row of the table as it is sorted. */
  function step(by: number): void {
    const row = Math.min(Math.max(cutRow.value + by, 0), count.value - 1)
    budget.moveTo((rows.value?.[row] ?? row) + 1)
  }

  /** Keeps the cut's row in view while the cut moves. */
  watch(
    () => [budget.cut, rows.value, scroller.value] as const,
    async () => {
      await nextTick()
      const box = scroller.value
      if (!box) return
      const at = cutRow.value * ROW
      const inside = box.clientHeight - 2 * ROW
      const isOut = cutRow.value >= 0 && (at < box.scrollTop || at > box.scrollTop + inside - ROW)
      if (isOut) box.scrollTop = Math.max(0, at - inside / 2)
      seen()
    },
    { immediate: true, flush: 'post' },
  )

  return { sort, wanted, rows, count, first, last, visible, seen, sortBy, step }
}
