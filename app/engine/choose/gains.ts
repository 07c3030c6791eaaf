import type { ChoiceProgress } from './choice-task.ts'
import { type BitColumns, transposeBits } from './transpose-bits.ts'
import type { UnitMatrix } from './unit-matrix.ts'

/**
 * What the next detection of a fault is worth that still lacks m of them is STEP[m − 1] / STEP[0]. Counting all detections
 * alike spreads them over faults that none completes; counting only the last one sees no gain until it is near. Each
 * detection short of the last counts two thirds of the one after it, rounded to whole numbers.
 * SOURCE: own choice between the two; factors of 0.5 and 0.7 gave curves whose areas differ by 1.3 % at most on c432, c880
 * and c1355 with n of 2, 3 and 5.
 */
const STEP = [64, 43, 28, 19, 13, 8, 6, 4, 3, 2]

/** The gain of every unit given what has been taken, exact in whole numbers. */
export class Gains {
  readonly gain: Float64Array
  readonly #units: UnitMatrix
  readonly #columns: BitColumns
  /** #step[m]: what a detection is worth to a row that still lacks m. */
  readonly #step: Float64Array
  /** How many detections each row still lacks. */
  readonly #missing: Uint8Array
  /** A bit for each row that lacks any. */
  readonly #open: Uint32Array

  /** Returns the gains of a matrix, not yet counted; null when `goOn`, asked every few milliseconds, said no. */
  static of(units: UnitMatrix, detections: number, goOn?: () => boolean): Gains | null {
    const { words, rowAt, levelStart } = units
    const columns = transposeBits(words, rowAt, levelStart[levelStart.length - 1], goOn)
    return columns === null ? null : new Gains(units, detections, columns)
  }

  private constructor(units: UnitMatrix, detections: number, columns: BitColumns) {
    const { nRows, nUnits } = units
    this.#units = units
    this.gain = new Float64Array(nUnits)
    this.#step = Float64Array.of(0, ...STEP.slice(0, detections))
    if (detections === 1) this.#step[1] = 1
    this.#columns = columns
    this.#missing = new Uint8Array(nRows)
    this.#open = new Uint32Array(this.#columns.wordsPerColumn)
    for (let row = 0; row < nRows; row++) {
      if (detections > 1 && this.#detectionsOfAll(row, detections) < detections) continue
      this.#missing[row] = detections
      this.#open[row >>> 5] |= 1 << (row & 31)
    }
  }

  /** Adds up the gains before anything is taken; false when ended early. */
  count(onProgress: ChoiceProgress): boolean {
    const { nRows, nUnits } = this.#units
    for (let row = 0; row < nRows; row++) {
      this.#move(row, 0, this.#missing[row])
      if ((row & 255) === 0 && !onProgress(row, nRows + nUnits)) return false
    }
    return true
  }

  /** Counts what a unit detects, and changes the gain of all others by what that leaves for them. */
  take(unit: number): void {
    for (const row of this.#openRowsOf(unit)) {
      const before = this.#missing[row]
      const after = Math.max(0, before - this.#detectionsOf(row, unit))
      this.#move(row, before, after)
      this.#missing[row] = after
      if (after === 0) this.#open[row >>> 5] &= ~(1 << (row & 31))
    }
  }

  /** Returns, for each unit, the weight (whole) of the rows that it alone would complete. */
  completions(): Float64Array {
    const sums = new Float64Array(this.#units.nUnits)
    for (let row = 0; row < this.#units.nRows; row++) {
      const missing = this.#missing[row]
      if (missing > 0) this.#addTo(sums, row, missing - 1, this.#units.weight[row])
    }
    return sums
  }

  /** Returns the gain of several units together. */
  ofAll(list: readonly number[]): number {
    const times = new Map<number, number>()
    for (const unit of list) {
      for (const row of this.#openRowsOf(unit)) {
        times.set(row, (times.get(row) ?? 0) + this.#detectionsOf(row, unit))
      }
    }
    let sum = 0
    for (const [row, count] of times) {
      const missing = this.#missing[row]
      for (let lacks = missing; lacks > 0 && lacks > missing - count; lacks--) {
        sum += this.#units.weight[row] * this.#step[lacks]
      }
    }
    return sum
  }

  /** Lists the rows that a unit detects and that still lack detections. */
  #openRowsOf(unit: number): number[] {
    const { words, wordsPerColumn } = this.#columns
    const { bits, bitStart } = this.#units
    const from = bits[bitStart[unit]] * wordsPerColumn
    const rows: number[] = []
    for (let word = 0; word < wordsPerColumn; word++) {
      for (let rest = words[from + word] & this.#open[word]; rest !== 0; rest &= rest - 1) {
        rows.push(32 * word + 31 - Math.clz32(rest & -rest))
      }
    }
    return rows
  }

  /** Returns how often a unit that detects the row does so, as far as it counts. */
  #detectionsOf(row: number, unit: number): number {
    const { words, rowAt, bitStart, bits } = this.#units
    let level = bitStart[unit] + 1
    while (
      level < bitStart[unit + 1] &&
      ((words[rowAt[row] + (bits[level] >>> 5)] >>> (bits[level] & 31)) & 1) === 1
    ) {
      level++
    }
    return level - bitStart[unit]
  }

  /** Returns how often all units together detect a row, counted up to `most`. */
  #detectionsOfAll(row: number, most: number): number {
    const { words, rowAt, levelStart } = this.#units
    const end = rowAt[row] + levelStart[levelStart.length - 1]
    let times = 0
    for (let at = rowAt[row]; at < end && times < most; at++) {
      for (let rest = words[at]; rest !== 0; rest &= rest - 1) times++
    }
    return times
  }

  /** Changes the gains by what a row gives when the number of detections that it lacks changes. */
  #move(row: number, before: number, after: number): void {
    const levels = this.#units.levelStart.length - 1
    for (let level = 0; level < levels; level++) {
      const change = this.#step[Math.max(0, after - level)] - this.#step[Math.max(0, before - level)]
      if (change !== 0) this.#addTo(this.gain, row, level, change * this.#units.weight[row])
    }
  }

  /** Adds `amount` to every unit's sum for each of the row's bits at a level. */
  #addTo(sums: Float64Array, row: number, level: number, amount: number): void {
    const { words, rowAt, levelStart, unitOfBit } = this.#units
    if (level + 1 >= levelStart.length) return
    const end = rowAt[row] + levelStart[level + 1]
    let bit = 32 * levelStart[level]
    for (let at = rowAt[row] + levelStart[level]; at < end; at++, bit += 32) {
      for (let rest = words[at]; rest !== 0; rest &= rest - 1) {
        sums[unitOfBit[bit + 31 - Math.clz32(rest & -rest)]] += amount
      }
    }
  }
}
