import { faultName, type FaultList } from '../faults/fault-list.ts'
import type { ChoiceTask } from './choice-task.ts'
import { detectionsBy } from './detected-weight.ts'

/** What a cut loses against the whole set, one entry per class of faults. Columns have one length. */
export type LostFaults = {
  /** Rows of the detection matrix, ascending. */
  readonly row: Uint32Array
  readonly weight: Float64Array
  /** The cheapest pattern outside the cut that brings the class back by itself; −1 where it takes several. */
  readonly pattern: Int32Array
  /** What that pattern costs, with the rest of its group; 0 where pattern is −1. */
  readonly cost: Float64Array
}

/**
 * Returns the classes that the whole set detects often enough and the chosen patterns do not, each with the cheapest
 * pattern that brings it back; ties go to the first in the file. Patterns that are left out bring nothing back.
 */
export function lostFaults(task: ChoiceTask, chosen: ArrayLike<number>): LostFaults {
  const { matrix, rules, weights, costs, detections } = task
  const unitCost = new Float64Array(rules.nUnits)
  const isChosen = new Uint8Array(matrix.nPatterns)
  for (let at = 0; at < chosen.length; at++) isChosen[chosen[at]] = 1
  for (let at = 0; at < rules.unitPatterns.length; at++) {
    unitCost[rules.unitOf[rules.unitPatterns[at]]] += costs[rules.unitPatterns[at]]
  }
  const inCut = detectionsBy(task, chosen)
  const inAll = detectionsBy(task, rules.unitPatterns)

  const row: number[] = []
  const pattern: number[] = []
  const cost: number[] = []
  for (let one = 0; one < matrix.nRows; one++) {
    if (inCut[one] >= detections || inAll[one] < detections) continue
    row.push(one)
    const cheapest = detections - inCut[one] === 1 ? cheapestFor(one) : -1
    pattern.push(cheapest)
    cost.push(cheapest < 0 ? 0 : unitCost[rules.unitOf[cheapest]])
  }
  return {
    row: Uint32Array.from(row),
    weight: Float64Array.from(row, (one) => weights[one]),
    pattern: Int32Array.from(pattern),
    cost: Float64Array.from(cost),
  }

  function cheapestFor(one: number): number {
    let best = -1
    for (let word = 0; word < matrix.wordsPerRow; word++) {
      for (let rest = matrix.words[one * matrix.wordsPerRow + word]; rest !== 0; rest &= rest - 1) {
        const candidate = 32 * word + 31 - Math.clz32(rest & -rest)
        const unit = rules.unitOf[candidate]
        if (unit < 0 || isChosen[candidate] === 1) continue
        if (best < 0 || unitCost[unit] < unitCost[rules.unitOf[best]]) best = candidate
      }
    }
    return best
  }
}

/** How a block of the circuit fares in a cut; counts of uncollapsed faults. */
export type BlockLoss = {
  readonly block: string
  readonly faults: number
  readonly detected: number
  readonly lost: number
}

/** Returns the faults of each block, in order of first appearance: all, those that the cut detects, those that it loses. */
export function lossByBlock(task: ChoiceTask, faults: FaultList, chosen: ArrayLike<number>): BlockLoss[] {
  const stateOfClass = new Uint8Array(faults.nClasses)
  const inCut = detectionsBy(task, chosen)
  for (let row = 0; row < task.matrix.nRows; row++) {
    if (inCut[row] >= task.detections) stateOfClass[task.matrix.classOfRow[row]] = 1
  }
  for (const row of lostFaults(task, chosen).row) stateOfClass[task.matrix.classOfRow[row]] = 2
  const blocks = new Map<string, { faults: number; detected: number; lost: number }>()
  for (let fault = 0; fault < faults.nFaults; fault++) {
    const block = blockOf(faultName(faults, fault))
    let tally = blocks.get(block)
    if (tally === undefined) blocks.set(block, (tally = { faults: 0, detected: 0, lost: 0 }))
    tally.faults++
    if (stateOfClass[faults.classOf[fault]] === 1) tally.detected++
    if (stateOfClass[faults.classOf[fault]] === 2) tally.lost++
  }
  return [...blocks].map(([block, tally]) => ({ block, ...tally }))
}

/** Returns the hierarchy in which a fault's line lies, such as `core/alu` for `core/alu/u3.A/0`; empty at the top. */
export function blockOf(fault: string): string {
  const line = fault.slice(0, fault.lastIndexOf('/'))
  const driver = line.includes('>') ? line.slice(0, line.indexOf('>')) : line
  return driver.slice(0, Math.max(0, driver.lastIndexOf('/')))
}
