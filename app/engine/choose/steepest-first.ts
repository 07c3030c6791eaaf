import type { ChoiceProgress, ChoiceTask } from './choice-task.ts'
import type { Order, OrderName } from './order.ts'
import { Gains } from './gains.ts'
import { buildUnitMatrix, type UnitMatrix } from './unit-matrix.ts'
import { UnitSequence } from './unit-sequence.ts'

/**
 * Returns the order that at each step takes the unit with the largest gain per cycle; ties go to the first in the file.
 * The gain of a unit is the weight of the faults that it adds. For n-detect the detections short of the last count too,
 * less the further a fault is from n (Gains says how much): by the last ones alone no first step would gain anything.
 * A unit that has to wait for others competes together with them. Null when `onProgress` ended it early.
 * SOURCE: Nemhauser, Wolsey & Fisher 1978, sections 4 and 5, for the greedy rule; gains kept exact by subtracting a
 * fault from all of its patterns when it counts no more.
 */
export function steepestFirst(task: ChoiceTask, onProgress: ChoiceProgress = () => true): Order | null {
  return orderBySteps(task, 'steepest', () => true, onProgress)
}

/**
 * Returns the order that first runs a given choice, steepest first, and then the rest. The choice has to be one that the
 * rules allow.
 */
export function steepestWithin(task: ChoiceTask, name: OrderName, patterns: Iterable<number>): Order {
  const isMember = new Uint8Array(task.rules.nUnits)
  for (const pattern of patterns) isMember[task.rules.unitOf[pattern]] = 1
  const order = orderBySteps(
    task,
    name,
    (unit) => isMember[unit] === 1,
    () => true,
  )
  if (order === null) throw new Error('nothing asked the order to end')
  return order
}

function orderBySteps(
  task: ChoiceTask,
  name: OrderName,
  isCandidate: (unit: number) => boolean,
  onProgress: ChoiceProgress,
): Order | null {
  const { rules } = task
  const goOn = (): boolean => onProgress(0, task.matrix.nRows + rules.nUnits)
  const units = buildUnitMatrix(task, goOn)
  const gains = units === null ? null : Gains.of(units, task.detections, goOn)
  if (units === null || gains === null) return null
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
  const isFree = (unit: number): boolean =>
    gains.gain[unit] > 0 && order.placed[unit] === 0 && isCandidate(unit)
  for (;;) {
    const unit = steepest(units, gains, (one) => isFree(one) && (!hasPredecessors || order.isReady(one)))
    let bundle = unit < 0 ? [] : [unit]
    if (hasPredecessors) bundle = steeperBundle(units, gains, order, bundle, isFree)
    if (bundle.length === 0) break
    for (const one of bundle) place(one)
    if (!onProgress(units.nRows + order.units.length, units.nRows + units.nUnits)) return null
  }
  if (name !== 'steepest') {
    for (let unit = 0; unit < rules.nUnits; unit++) if (isCandidate(unit)) order.placeWithPredecessors(unit)
  }
  return order.finish(name, order.units.length)
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
    if (best >= 0 && gain[unit] * unitCost[best] <= gain[best] * unitCost[unit]) continue
    if (isAllowed(unit)) best = unit
  }
  return best
}

/** Returns the best of the bundle at hand and of every waiting unit with all that it waits for. */
function steeperBundle(
  units: UnitMatrix,
  gains: Gains,
  order: UnitSequence,
  bundle: number[],
  isFree: (unit: number) => boolean,
): number[] {
  const { unitCost } = units
  const sum = (list: readonly number[], of: Float64Array): number =>
    list.reduce((total, unit) => total + of[unit], 0)
  let best = bundle
  let bestGain = sum(bundle, gains.gain)
  let bestCost = sum(bundle, unitCost)
  for (let unit = 0; unit < units.nUnits; unit++) {
    if (!isFree(unit) || order.isReady(unit)) continue
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
