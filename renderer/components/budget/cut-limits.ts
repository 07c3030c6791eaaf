import type { BudgetView, OrderColumns } from '../../../app/contract/shapes/budget.ts'
import { firstAbove, firstAtLeast } from '../../charts/column-search.ts'
import type { CutFigures } from './cut-figures.ts'
import { detectedColumn } from './cut-figures.ts'

/** The cuts of one order that its limits allow. Null: there is no such limit. */
export type CutLimits = {
  /** Most patterns that keep the time limit and that fit into the vector memory; −1 where not even none do. */
  readonly time: number | null
  readonly memory: number | null
  /** Fewest patterns that reach the coverage and the escape rate asked; Infinity where none do. */
  readonly goal: number | null
  readonly escapes: number | null
}

export type BrokenLimits = {
  readonly timeOver: number
  readonly memoryOver: number
  readonly coverageShort: number
  readonly dppmOver: number
}

/**
 * Returns between which cuts all limits are kept. Limits are inclusive; the time limit is on what the patterns take on
 * one site, set-up included.
 */
export function limitsOf(view: BudgetView, columns: OrderColumns, n: number): CutLimits {
  const { maxMilliseconds, minCoverage, maxDppm } = view.limits
  const orNever = (cut: number): number => (cut > columns.patterns ? Infinity : cut)
  return {
    time: maxMilliseconds === null ? null : firstAbove(columns.milliseconds, maxMilliseconds) - 1,
    memory: view.vectorMemory === null ? null : firstAbove(columns.vectorMemory, view.vectorMemory) - 1,
    goal:
      minCoverage === null
        ? null
        : orNever(firstAtLeast(detectedColumn(columns, n), minCoverage * view.total)),
    escapes:
      maxDppm === null
        ? null
        : orNever(
            firstAbove(
              columns.dppm.map((dppm) => -dppm),
              -maxDppm - 1e-12,
            ),
          ),
  }
}

/** Returns by how much a cut breaks each limit; 0 where it keeps it. */
export function brokenLimits(view: BudgetView, figures: CutFigures): BrokenLimits {
  const { maxMilliseconds, minCoverage, maxDppm } = view.limits
  const over = (value: number, most: number | null): number => (most === null ? 0 : Math.max(0, value - most))
  return {
    timeOver: over(figures.milliseconds, maxMilliseconds),
    memoryOver: over(figures.vectorMemory, view.vectorMemory),
    // As the goal's own cut is found: a division may round differently.
    coverageShort:
      minCoverage !== null && figures.detected < minCoverage * view.total
        ? minCoverage - figures.coverage
        : 0,
    dppmOver: over(figures.dppm, maxDppm),
  }
}

/** The most patterns that keep time and memory. */
export function mostInside({ time, memory }: CutLimits, patterns: number): number {
  return Math.max(0, Math.min(time ?? patterns, memory ?? patterns, patterns))
}

/** The fewest patterns that meet what is asked of coverage and escapes; null where nothing is asked or none do. */
export function fewestForGoal({ goal, escapes }: CutLimits): number | null {
  if (goal === null && escapes === null) return null
  const fewest = Math.max(goal ?? 0, escapes ?? 0)
  return Number.isFinite(fewest) ? fewest : null
}
