import type { ChoiceProgress, ChoiceTask } from './choice-task.ts'
import { UnitSequence } from './delivered-order.ts'
import type { Order } from './order.ts'
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

/** The gain of every unit given what has been taken, exact in whole numbers. */
class Gains {
  readonly gain: Float64Array
  readonly detections: number
  readonly #units: UnitMatrix
  /** How often each row still counts. */
  readonly #missing: Uint8Array
  /** Rows that still count, in the first #nOpen places. */
  readonly #open: Uint32Array
  #nOpen: number

  constructor(units: UnitMatrix, detections: number) {
    this.#units = units
    this.detections = detections
    this.gain = new Float64Array(units.nUnits)
    this.#missing = new Uint8Array(units.nRows).fill(detections)
    this.#open = Uint32Array.from(this.#missing.keys())
    this.#nOpen = units.nRows
  }

  /** Adds up the gains before anything is taken; false when ended early. */
  count(onProgress: ChoiceProgress): boolean {
    const { nRows, nUnits, weight } = this.#units
    for (let row = 0; row < nRows; row++) {
      this.#add(row, 0, this.detections, weight[row])
      if ((row & 255) === 0 && !onProgress(row, nRows + nUnits)) return false
    }
    return true
  }

  /** Counts what a unit detects, and lowers the gain of all others by what they no longer add. */
  take(unit: number): void {
    const { weight } = this.#units
    let left = 0
    for (let at = 0; at < this.#nOpen; at++) {
      const row = this.#open[at]
      const before = this.#missing[row]
      const after = Math.max(0, before - this.#detectionsOf(row, unit))
      if (after < before) {
        this.#add(row, after, before, -weight[row])
        this.#missing[row] = after
      }
      if (after > 0) this.#open[left++] = row
    }
    this.#nOpen = left
  }

  /** Returns the weight of the rows that a unit would detect often enough. */
  completes(unit: number): number {
    let sum = 0
    for (let at = 0; at < this.#nOpen; at++) {
      const row = this.#open[at]
      if (this.#detectionsOf(row, unit) >= this.#missing[row]) sum += this.#units.weight[row]
    }
    return sum
  }

  /** Returns the gain of several units together. */
  ofAll(list: readonly number[]): number {
    let sum = 0
    for (let at = 0; at < this.#nOpen; at++) {
      const row = this.#open[at]
      let count = 0
      for (const unit of list) count += this.#detectionsOf(row, unit)
      sum += this.#units.weight[row] * Math.min(count, this.#missing[row])
    }
    return sum
  }

  #detectionsOf(row: number, unit: number): number {
    const { words, rowAt, bitStart, bits } = this.#units
    const end = bitStart[unit + 1]
    let level = bitStart[unit]
    while (level < end && ((words[rowAt[row] + (bits[level] >>> 5)] >>> (bits[level] & 31)) & 1) === 1)
      level++
    return level - bitStart[unit]
  }

  /** Adds `amount` to the gain of every unit for each of the row's bits at levels `from` to `to` − 1. */
  #add(row: number, from: number, to: number, amount: number): void {
    const { words, rowAt, levelStart, unitOfBit } = this.#units
    const { gain } = this
    const levels = levelStart.length - 1
    const end = rowAt[row] + levelStart[Math.min(to, levels)]
    let bit = 32 * levelStart[Math.min(from, levels)]
    for (let at = rowAt[row] + (bit >>> 5); at < end; at++, bit += 32) {
      for (let rest = words[at]; rest !== 0; rest &= rest - 1) {
        gain[unitOfBit[bit + 31 - Math.clz32(rest & -rest)]] += amount
      }
    }
  }
}
