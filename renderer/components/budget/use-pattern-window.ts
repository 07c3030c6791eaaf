import { computed, nextTick, onBeforeUnmount, ref, type Ref, watch } from 'vue'
import { clamp } from '../../charts/plot-geometry.ts'
import { formats } from '../../formats.ts'
import { useBudget } from '../../stores/budget.ts'
import { ruleReader } from './constraint-rules.ts'
import { detectedColumn } from './cut-figures.ts'
import { sortedRows, type SortKey } from './pattern-rows.ts'

/** Height of a row in pixels, as the style has it. */
export const ROW = 27
/** Of the head that stays above them. */
const HEAD = 31
const SPARE = 3
/** While the cut is dragged, the table follows in steps of its own: sentence and figures come first. */
const FOLLOW_MS = 90

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
  /** The pattern's number, from 1. */
  readonly pattern: number
  /** What constraints say of it. */
  readonly rule: string
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

  const ruleOf = computed(() => ruleReader(budget.assumptions?.constraints ?? null))

  function gainAt(at: number): number {
    return (detected.value[at + 1] ?? 0) - (detected.value[at] ?? 0)
  }

  function rowAt(row: number): PatternRow {
    const { columns, view } = budget
    const at = rows.value?.[row] ?? row
    const gain = gainAt(at)
    const alone = columns?.detectsAlone[at] ?? 0
    const pattern = columns?.pattern[at] ?? 0
    return {
      row,
      at,
      pattern,
      rule: ruleOf.value(pattern),
      cells: [
        formats.count(at + 1).value,
        formats.count(pattern).value,
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
    top.value = scroller.value?.scrollTop ?? 0
  }

  const observer = new ResizeObserver(([entry]) => {
    height.value = entry?.contentRect.height ?? height.value
  })
  watch(scroller, (box) => box && observer.observe(box), { flush: 'post', immediate: true })
  onBeforeUnmount(() => observer.disconnect())

  function sortBy(key: SortKey): void {
    const isAgain = sort.value.key === key
    sort.value = { key, isDown: isAgain ? !sort.value.isDown : key !== 'position' && key !== 'pattern' }
  }

  /** The cut as the table shows it. */
  const cut = ref(budget.cut)
  let following: ReturnType<typeof setTimeout> | undefined
  watch(
    () => budget.cut,
    () => {
      following ??= setTimeout(() => {
        following = undefined
        cut.value = budget.cut
      }, FOLLOW_MS)
    },
  )
  onBeforeUnmount(() => clearTimeout(following))

  /** The row that shows the pattern at the cut; −1 where none does. */
  const cutRow = computed(() => (rows.value === null ? cut.value - 1 : rows.value.indexOf(cut.value - 1)))

  /** Puts the cut at a neighbouring row of the table as it is sorted. */
  function step(by: number): void {
    cut.value = budget.cut
    const row = clamp(cutRow.value + by, 0, count.value - 1)
    budget.moveTo((rows.value?.[row] ?? row) + 1)
  }

  /**
   * Keeps the cut's row in view while the cut moves. Nothing is read from the page: a read here would lay the whole
   * window out a second time in the same frame.
   */
  watch(
    () => [cutRow.value, height.value, scroller.value] as const,
    ([row, tall, box]) => {
      const at = row * ROW
      const inside = tall - HEAD - ROW
      if (row < 0 || box === null || (at >= top.value && at <= top.value + inside)) return
      top.value = Math.round(clamp(at - inside / 2, 0, Math.max(0, count.value * ROW + HEAD - tall)))
      // Rows of the new place have to be there before the box can be scrolled to them.
      void nextTick(() => (box.scrollTop = top.value))
    },
    { immediate: true },
  )

  return { cut, sort, wanted, rows, count, first, last, visible, seen, sortBy, step }
}
