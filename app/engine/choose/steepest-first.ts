import type { ChoiceProgress, ChoiceTask } from './choice-task.ts'
import { UnitSequence } from './delivered-order.ts'
import type { Order } from './order.ts'
import { Gains } from './gains.ts'
import { buildUnitMatrix, type UnitMatrix } from './unit-matrix.ts'

/**
 * Returns the order that at each step takes the unit with the largest gain per cycle; ties go to the first in the file.
 * The gain of a unit is the weight of the detections that it adds, each fault counting up to `detections` times: for
 * n-detect this sum has diminishing returns where the number of faults detected n times has not. Among equal gains the
 * one that completes more weight goes first.
 * A unit that has to wait for others competes together with them. Null when `onProgress` ended it early.
 * SOURCE: Nemhauser, Wolsey & Fisher 1978, sections 4 and 5, for the greedy rule; gains kept exact by subtracting a
 * fault from all of its patterns when it counts no more.
 */
export function steepestFirst(task: ChoiceTask, onProgress: ChoiceProgress = () => true): Order | null {
  const { rules } = task
  const units = buildUnitMatrix(task)
  const gains = new Gains(units, task.detections)
  const order = new UnitSequence(rules)
  const place = (unit: number): void => {
    order.place(unit)
    gains.take(unit)
  }

  if (!gains.count(onProgress)) return null
  for (const unit of rules.first) place(unit)
  for (;;) {
    const unit = steepest(
      units,
      gains,
      (one) => rules.kept[one] === 1 && order.placed[one] === 0 && order.isReady(one),
    )
    if (unit < 0) break
    place(unit)
  }
  const hasPredecessors = rules.predecessors.length > 0
  for (;;) {
    let unit = steepest(
      units,
      gains,
      (one) => gains.gain[one] > 0 && order.placed[one] === 0 && (!hasPredecessors || order.isReady(one)),
    )
    let bundle = unit < 0 ? [] : [unit]
    if (hasPredecessors) bundle = steeperBundle(units, gains, order, bundle)
    if (bundle.length === 0) break
    for (unit of bundle) place(unit)
    if (!onProgress(units.nRows + order.units.length, units.nRows + units.nUnits)) return null
  }
  return order.finish('steepest', order.units.length)
}

/** Returns the unit with the largest gain per cycle among those allowed, −1 where there is none. */
function steepest(
  { nUnits, unitCost }: UnitMatrix,
  gains: Gains,
  isAllowed: (unit: number) => boolean,
): number {
  const { gain } = gains
  let best = -1
  for (let unit = 0; unit < nUnits; unit++) {
    if (best >= 0) {
      const difference = gain[unit] * unitCost[best] - gain[best] * unitCost[unit]
      if (difference < 0) continue
      if (
        difference === 0 &&
        !(gains.detections > 1 && isAllowed(unit) && gains.completes(unit) > gains.completes(best))
      )
        continue
    }
    if (isAllowed(unit)) best = unit
  }
  return best
}

/** Returns the best of the bundle at hand and of every waiting unit with all that it waits for. */
function steeperBundle(units: UnitMatrix, gains: Gains, order: UnitSequence, bundle: number[]): number[] {
  const { unitCost } = units
  const sum = (list: readonly number[], of: Float64Array): number =>
    list.reduce((total, unit) => total + of[unit], 0)
  let best = bundle
  let bestGain = sum(bundle, gains.gain)
  let bestCost = sum(bundle, unitCost)
  for (let unit = 0; unit < units.nUnits; unit++) {
    if (order.placed[unit] === 1 || gains.gain[unit] === 0 || order.isReady(unit)) continue
    const candidate = order.missingFor(unit)
    const cost = sum(candidate, unitCost)
    const isSteeper = (gain: number): boolean => best.length === 0 || gain * bestCost > bestGain * cost
    if (!isSteeper(sum(candidate, gains.gain))) continue
    const gain = gains.ofAll(candidate)
    if (!isSteeper(gain)) continue
    best = candidate
    bestGain = gain
    bestCost = cost
  }
  return best
}
