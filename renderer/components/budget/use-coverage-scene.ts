import { computed, ref, type Ref, watch } from 'vue'
import type { OrderColumns, OrderName } from '../../../app/contract/shapes/budget.ts'
import { axisColumn, type AxisName } from '../../charts/axis.ts'
import { chartColours } from '../../charts/chart-colours-of.ts'
import { type ChartPlace, defaultPlace, windowOf } from '../../charts/chart-window.ts'
import { coverageOption, type Curve } from '../../charts/coverage-option.ts'
import { escapeTicks } from '../../charts/escape-ticks.ts'
import { leastEffort } from '../../charts/least-effort.ts'
import { clamp, plotOf, type Size } from '../../charts/plot-geometry.ts'
import { useBudget } from '../../stores/budget.ts'
import { useCeiling } from '../../stores/ceiling.ts'
import { useSettings } from '../../stores/settings.ts'
import { detectedColumn } from './cut-figures.ts'
import type { Cut } from './use-cut.ts'

export type ChartChoice = {
  readonly cut: Cut
  readonly axis: AxisName
  readonly shown: readonly OrderName[]
  readonly isCeilingShown: boolean
}

/** What the coverage chart shows and which part of it; nothing in here depends on where the cut is. */
export function useCoverageScene(choice: ChartChoice, size: Ref<Size>) {
  const budget = useBudget()
  const ceiling = useCeiling()
  const settings = useSettings()

  const n = choice.cut.n
  /** The part in view; null: the usual one. */
  const place = ref<ChartPlace | null>(null)
  const columns = computed(() => budget.columns as OrderColumns)
  const total = computed(() => budget.view?.total ?? 1)
  const xs = computed(() => axisColumn(columns.value, choice.axis))
  const usual = computed(() => {
    const highest = (budget.view?.orders ?? [columns.value]).map(
      (each) => (detectedColumn(each, n.value).at(-1) ?? 0) / total.value,
    )
    return defaultPlace(columns.value.patterns, Math.max(...highest), budget.view?.limits.minCoverage ?? null)
  })
  watch(
    () => [budget.runId, columns.value.patterns, n.value],
    () => (place.value = null),
  )
  const current = computed(() => place.value ?? usual.value)
  const window = computed(() => windowOf(current.value, xs.value))
  const plot = computed(() => plotOf(size.value))
  const colours = computed(() => chartColours(settings.palette))

  const curvesAlong = (of: (columns: OrderColumns) => Float64Array): Curve[] =>
    (budget.view?.orders ?? [])
      .filter(({ order }) => choice.shown.includes(order))
      .map((each) => ({ name: each.order, xs: of(each), ys: detectedColumn(each, n.value) }))
      // The first of them is drawn last, over the others.
      .reverse()
  const curves = computed(() => curvesAlong((each) => axisColumn(each, choice.axis)))
  const insetCurves = computed(() => curvesAlong((each) => axisColumn(each, 'patterns')))
  const ceilingCurve = computed<Curve | null>(() =>
    choice.isCeilingShown && ceiling.ceiling
      ? { name: 'ceiling', xs: leastEffort(xs.value), ys: ceiling.ceiling.ceiling }
      : null,
  )

  const placeAlong = (cut: number | null | undefined): number | null =>
    cut === null || cut === undefined || !Number.isFinite(cut) || cut >= columns.value.patterns
      ? null
      : (xs.value[clamp(cut, 0, columns.value.patterns)] ?? null)
  /** Where limits stand along the axis; null where there is none or every cut keeps it. */
  const limits = computed(() => ({
    time: placeAlong(choice.cut.limits.value?.time),
    memory: placeAlong(choice.cut.limits.value?.memory),
    goal: budget.view?.limits.minCoverage ?? null,
  }))
  const option = computed(() => {
    const uprights = [limits.value.time, limits.value.memory].filter((at) => at !== null)
    return coverageOption({
      size: size.value,
      window: window.value,
      total: total.value,
      curves: curves.value,
      ceiling: ceilingCurve.value,
      inside: { x: uprights.length > 0 ? Math.min(...uprights) : null, y: limits.value.goal },
      colours: colours.value,
    })
  })
  /** Escapes follow from what is detected once, plainly: by more detections or weights, the height is no scale of them. */
  const escapes = computed(() =>
    n.value > 1 || budget.view?.isWeighted
      ? []
      : escapeTicks(columns.value.detected, columns.value.dppm, total.value, window.value.y, 6),
  )

  return {
    place,
    columns,
    total,
    xs,
    current,
    window,
    plot,
    curves,
    insetCurves,
    ceilingCurve,
    limits,
    option,
    escapes,
  }
}

export type CoverageScene = ReturnType<typeof useCoverageScene>
