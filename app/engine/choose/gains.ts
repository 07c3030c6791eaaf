import type { ChoiceProgress } from './choice-task.ts'
import type { UnitMatrix } from './unit-matrix.ts'

/** The gain of every unit given what has been taken, exact in whole numbers. */
export class Gains {
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
      this.#addTo(this.gain, row, 0, this.detections, weight[row])
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
        this.#addTo(this.gain, row, after, before, -weight[row])
        this.#missing[row] = after
      }
      if (after > 0) this.#open[left++] = row
    }
    this.#nOpen = left
  }

  /** Returns, for each unit, the weight (whole) of the rows that it alone would complete. */
  completions(): Float64Array {
    const sums = new Float64Array(this.#units.nUnits)
    for (let at = 0; at < this.#nOpen; at++) {
      const row = this.#open[at]
      this.#addTo(sums, row, this.#missing[row] - 1, this.#missing[row], this.#units.weight[row])
    }
    return sums
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

  /** Adds `amount` to every unit's sum for each of the row's bits at levels `from` to `to` − 1. */
  #addTo(sums: Float64Array, row: number, from: number, to: number, amount: number): void {
    const { words, rowAt, levelStart, unitOfBit } = this.#units
    const levels = levelStart.length - 1
    const end = rowAt[row] + levelStart[Math.min(to, levels)]
    let bit = 32 * levelStart[Math.min(from, levels)]
    for (let at = rowAt[row] + (bit >>> 5); at < end; at++, bit += 32) {
      for (let rest = words[at]; rest !== 0; rest &= rest - 1) {
        sums[unitOfBit[bit + 31 - Math.clz32(rest & -rest)]] += amount
      }
    }
  }
}
