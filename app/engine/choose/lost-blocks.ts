import { faultName, type FaultList } from '../faults/fault-list.ts'
import type { ChoiceTask } from './choice-task.ts'
import { blockOf, type BlockLoss, lossByBlock, lostFaults } from './lost-faults.ts'

/** How a block fares in a cut, and the one pattern that brings most of what it loses back. */
export type LostBlock = BlockLoss & {
  readonly cheapest: {
    /** From 1, as in the file. */
    readonly pattern: number
    readonly cycles: number
    /** How many of the block's lost faults it detects. */
    readonly faults: number
  } | null
}

/**
 * Returns the blocks of a circuit with what a cut loses in each and the pattern outside the cut that brings the most of
 * it back per cycle, the first in the file of several; null where no single pattern does.
 */
export function lostBlocks(task: ChoiceTask, faults: FaultList, chosen: ArrayLike<number>): LostBlock[] {
  const { matrix, rules, costs } = task
  const { row, pattern } = lostFaults(task, chosen)
  const lostRowOf = new Int32Array(faults.nClasses).fill(-1)
  for (const [at, one] of row.entries()) if (pattern[at] >= 0) lostRowOf[matrix.classOfRow[one]] = one
  const isOpen = new Uint8Array(matrix.nPatterns)
  for (let p = 0; p < matrix.nPatterns; p++) isOpen[p] = rules.unitOf[p] >= 0 ? 1 : 0
  for (let at = 0; at < chosen.length; at++) isOpen[chosen[at]] = 0

  const broughtBack = new Map<string, Map<number, number>>()
  for (let fault = 0; fault < faults.nFaults; fault++) {
    const lostRow = lostRowOf[faults.classOf[fault]]
    if (lostRow < 0) continue
    const block = blockOf(faultName(faults, fault))
    let tally = broughtBack.get(block)
    if (tally === undefined) broughtBack.set(block, (tally = new Map()))
    for (let word = 0; word < matrix.wordsPerRow; word++) {
      for (let rest = matrix.words[lostRow * matrix.wordsPerRow + word]; rest !== 0; rest &= rest - 1) {
        const candidate = 32 * word + 31 - Math.clz32(rest & -rest)
        if (isOpen[candidate] === 1) tally.set(candidate, (tally.get(candidate) ?? 0) + 1)
      }
    }
  }
  return lossByBlock(task, faults, chosen).map((loss) => {
    let cheapest: LostBlock['cheapest'] = null
    for (const [candidate, count] of broughtBack.get(loss.block) ?? []) {
      const cycles = costs[candidate]
      const better = cheapest === null ? 1 : count * cheapest.cycles - cheapest.faults * cycles
      if (better > 0 || (better === 0 && cheapest !== null && candidate + 1 < cheapest.pattern)) {
        cheapest = { pattern: candidate + 1, cycles, faults: count }
      }
    }
    return { ...loss, cheapest }
  })
}
