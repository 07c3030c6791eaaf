import type { ChoiceRules } from './choice-rules.ts'
import { type ChoiceTask, withSlack } from './choice-task.ts'
import { cutPlaces } from './cut-places.ts'
import { detectedWeight } from './detected-weight.ts'
import { Gains } from './gains.ts'
import type { Order } from './order.ts'
import { buildUnitMatrix } from './unit-matrix.ts'
import { UnitSequence } from './unit-sequence.ts'

export type BudgetChoice = {
  /** In the order in which they run. */
  readonly patterns: Uint32Array
  readonly weight: number
  readonly cost: number
  readonly from: 'prefix' | 'single'
}

/**
 * Returns the longest prefix of an order that fits the budget or, where it detects more, the best single unit that fits
 * (with what is kept and what has to run before it); null where not even the kept patterns fit.
 * With unequal costs a prefix alone can be as bad as one likes, the better of the two cannot.
 * SOURCE: Khuller, Moss & Naor 1999, theorem 3.
 */
export function bestPrefixOrSingle(task: ChoiceTask, order: Order, budget: number): BudgetChoice | null {
  const { rules, costs } = task
  const mayCut = cutPlaces(order, rules)
  const costOf = (patterns: ArrayLike<number>): number => {
    let sum = 0
    for (let at = 0; at < patterns.length; at++) sum += costs[patterns[at]]
    return sum
  }
  let length = -1
  let spent = 0
  for (let k = 0; k <= order.chosen && spent <= withSlack(budget); k++) {
    if (mayCut[k] === 1) length = k
    if (k < order.chosen) spent += costs[order.sequence[k]]
  }
  if (length < 0) return null
  const prefix = order.sequence.slice(0, length)
  let best: BudgetChoice = {
    patterns: prefix,
    weight: detectedWeight(task, prefix),
    cost: costOf(prefix),
    from: 'prefix',
  }

  const costsDiffer = costs.some((cost) => cost !== costs[0]) || rules.nUnits < rules.nPatterns
  if (!costsDiffer && rules.predecessors.length === 0) return best
  const kept = new UnitSequence(rules)
  for (const unit of rules.first) kept.place(unit)
  for (let unit = 0; unit < rules.nUnits; unit++) if (rules.kept[unit] === 1) kept.placeWithPredecessors(unit)
  const units = buildUnitMatrix(task)
  const gains = units === null ? null : Gains.of(units, task.detections)
  if (gains === null) throw new Error('nothing asked the gains to end')
  for (const unit of kept.units) gains.take(unit)
  const gain = gains.completions()
  const keptPatterns = kept.patterns()
  const keptCost = costOf(keptPatterns)

  let steepest = -1
  for (let unit = 0; unit < rules.nUnits; unit++) {
    if (kept.placed[unit] === 1 || (steepest >= 0 && kept.isReady(unit) && gain[unit] <= gain[steepest]))
      continue
    const added = kept.missingFor(unit).flatMap((one) => patternsOf(rules, one))
    const cost = keptCost + costOf(added)
    if (cost > withSlack(budget)) continue
    if (kept.isReady(unit)) steepest = unit
    const patterns = Uint32Array.of(...keptPatterns, ...added)
    const weight = detectedWeight(task, patterns)
    if (weight > best.weight) best = { patterns, weight, cost, from: 'single' }
  }
  return best
}

function patternsOf({ unitStart, unitPatterns }: ChoiceRules, unit: number): number[] {
  return [...unitPatterns.subarray(unitStart[unit], unitStart[unit + 1])]
}
