import { computed } from 'vue'
import { useBudget } from '../../stores/budget.ts'
import { useCeiling } from '../../stores/ceiling.ts'
import { formats } from '../../formats.ts'
import { figuresAt } from './cut-figures.ts'
import { brokenLimits, fewestForGoal, limitsOf, mostInside } from './cut-limits.ts'
import { constraintsInWords } from './constraint-rules.ts'
import {
  brokenWords,
  ceilingWords,
  constraintTrouble,
  cutSentence,
  keptWords,
  smallestWords,
} from './cut-words.ts'

/** Patterns to either side of the cut of which gain and price are shown. */
export const NEIGHBOURS = 10

/** What the Budget screen's parts say of the cut: all of it follows from the columns, nothing is asked of the host. */
export function useCut() {
  const budget = useBudget()
  const ceiling = useCeiling()
  const n = computed(() => budget.assumptions?.n ?? 1)
  const marks = computed(() => budget.view?.markers.find(({ order }) => order === budget.order)?.marks ?? [])
  const limits = computed(() =>
    budget.view && budget.columns ? limitsOf(budget.view, budget.columns, n.value) : null,
  )
  const figures = computed(() => figuresOf(budget.cut))
  const before = computed(() => figuresOf(Math.max(0, budget.cut - NEIGHBOURS)))
  const after = computed(() => figuresOf(Math.min(budget.patterns, budget.cut + NEIGHBOURS)))
  const broken = computed(() =>
    budget.view && figures.value ? brokenLimits(budget.view, figures.value) : null,
  )
  const sentence = computed(() =>
    budget.view && figures.value && after.value
      ? cutSentence(figures.value, after.value, budget.view, formats, n.value)
      : [],
  )
  const inForce = computed(() => {
    const { constraints } = budget.assumptions ?? {}
    return constraints ? `Constraints in force: ${constraintsInWords(constraints, formats)}.` : ''
  })
  const state = computed(() => {
    const { view } = budget
    if (!view || !figures.value || !broken.value) return null
    const { constraints } = budget.assumptions ?? {}
    const rules =
      constraints && budget.columns ? constraintTrouble(budget.columns.mayCut, budget.cut, formats) : ''
    const trouble = [brokenWords(broken.value, formats), rules].join(' ').trim()
    const has = {
      time: view.limits.maxMilliseconds !== null,
      memory: view.vectorMemory !== null,
      goal: view.limits.minCoverage !== null || view.limits.maxDppm !== null,
    }
    const bound = ceiling.ceiling?.ceiling[budget.cut]
    const proof = bound === undefined ? '' : ceilingWords(figures.value, bound, view, n.value, formats)
    const fewest =
      budget.order === 'smallest' && view.smallest
        ? `Smallest complete set: ${smallestWords(view.smallest, n.value, formats)}.`
        : ''
    return {
      isBroken: trouble !== '',
      trouble,
      text: [trouble === '' ? keptWords(has) : '', inForce.value, fewest, proof]
        .filter((part) => part !== '')
        .join(' '),
    }
  })
  const ownBudgets = computed(() =>
    budget.budgets.filter(({ runId, order }) => runId === budget.runId && order === budget.order),
  )
  const stops = computed(() => {
    const cuts = [
      ...ownBudgets.value.map(({ cut }) => cut),
      ...marks.value.map(({ cut }) => cut),
      ...(limits.value
        ? [limits.value.time, limits.value.memory, limits.value.goal, limits.value.escapes]
        : []),
    ].filter((cut): cut is number => cut !== null && Number.isFinite(cut) && cut >= 0)
    return [...new Set(cuts)].sort((a, b) => a - b)
  })
  /** Where Home and End lead: the fewest that meet the goal, the most that fit, as far as constraints let them. */
  const ends = computed(() => {
    const { patterns } = budget
    const mayCut = budget.columns?.mayCut
    const fewest = limits.value ? (fewestForGoal(limits.value) ?? 0) : 0
    const most = limits.value ? Math.min(mostInside(limits.value, patterns), patterns) : patterns
    const kept = { fewest: mayCut?.indexOf(1, fewest) ?? -1, most: mayCut?.lastIndexOf(1, most) ?? -1 }
    return { fewest: kept.fewest < 0 ? fewest : kept.fewest, most: kept.most < 0 ? most : kept.most }
  })

  function figuresOf(cut: number) {
    return budget.view && budget.columns ? figuresAt(budget.view, budget.columns, cut, n.value) : null
  }

  return {
    n,
    marks,
    limits,
    figures,
    before,
    after,
    broken,
    sentence,
    state,
    ownBudgets,
    stops,
    ends,
    figuresOf,
  }
}

export type Cut = ReturnType<typeof useCut>
