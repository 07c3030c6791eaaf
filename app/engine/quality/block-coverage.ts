import type { FaultList } from '../faults/fault-list.ts'
import type { AreaShare } from './product.ts'

/** The block name that stands for all faults in no other block. */
export const OTHER_BLOCKS = '*'

/** Faults by block: which block each fault of a list lies in, and what that says of each class. */
export type FaultBlocks = {
  /** Length nFaults: index of the block, −1 where none is named for it. */
  readonly blockOf: Int32Array
  /** By block, length nClasses: how many faults of the block each class holds. */
  readonly classWeights: readonly Float64Array[]
}

/**
 * Sorts faults into blocks by the hierarchy in the names of their nets and cells: block `alu` holds `alu`, its pins and
 * everything below `alu/`; where blocks lie in each other the longest name counts, and `*` takes what no other holds.
 */
export function sortIntoBlocks(faults: FaultList, shares: readonly AreaShare[]): FaultBlocks {
  const other = shares.findIndex(({ block }) => block === OTHER_BLOCKS)
  const byLength = shares
    .map(({ block }, at) => ({ block, at }))
    .filter(({ at }) => at !== other)
    .sort((a, b) => b.block.length - a.block.length)
  const blockOf = new Int32Array(faults.nFaults)
  const classWeights = shares.map(() => new Float64Array(faults.nClasses))
  for (let line = 0; line < faults.lines.n; line++) {
    const name = faults.lines.nameOf(line).split('>', 1)[0]
    const block = byLength.find((one) => isWithin(name, one.block))?.at ?? other
    for (const fault of [2 * line, 2 * line + 1]) {
      blockOf[fault] = block
      if (block >= 0) classWeights[block][faults.classOf[fault]]++
    }
  }
  return { blockOf, classWeights }
}

function isWithin(name: string, block: string): boolean {
  return name.startsWith(block) && [undefined, '/', '.'].includes(name[block.length])
}
