import type { OutputOf } from '../contract/operations.ts'
import { blockOf, lossByBlock, lostFaults } from '../engine/choose/lost-faults.ts'
import { faultName } from '../engine/faults/fault-list.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { PlanJobs } from './plan-jobs.ts'
import { basisOf, heldDossier, orderOf } from './run-dossier.ts'

/** Lists the faults that a cut loses against the whole set: by block, and one page of them one by one; pattern and position are 0 where it takes several patterns to bring one back. */
export function lostFaultsJob(input: PlanJobs['lost-faults']['input']): DeskAnswer<OutputOf<'faults.lost'>> {
  const dossier = heldDossier(input.key)
  const { faults, matrix } = dossier
  const { task } = basisOf(dossier, input)
  const { sequence } = orderOf(dossier, input.order, input)
  const chosen = sequence.subarray(0, input.cut)
  const lost = lostFaults(task, chosen)

  const lossOfClass = new Int32Array(faults.nClasses).fill(-1)
  lost.row.forEach((row, at) => {
    lossOfClass[matrix.classOfRow[row] ?? 0] = at
  })
  const positionOf = new Uint32Array(sequence.length)
  sequence.forEach((pattern, at) => {
    positionOf[pattern] = at + 1
  })
  const block = input.block === null ? null : input.block.replace(/\/$/, '')
  const found: { fault: string; block: string; at: number }[] = []
  for (let fault = 0; fault < faults.nFaults; fault++) {
    const at = lossOfClass[faults.classOf[fault] ?? 0] ?? -1
    if (at < 0 || faults.lines.byChainTest[fault >>> 1] === 1) continue
    const name = faultName(faults, fault)
    const own = blockOf(name)
    if (block === null || own === block) found.push({ fault: name, block: own, at })
  }
  return new DeskAnswer({
    blocks: lossByBlock(task, faults, chosen),
    lost: found.length,
    rows: found.slice(input.first, input.first + input.count).map(({ fault, block: own, at }) => {
      const row = lost.row[at] ?? 0
      const pattern = lost.pattern[at] ?? -1
      return {
        fault,
        block: own,
        weight: (lost.weight[at] ?? 0) / (faults.classSize[matrix.classOfRow[row] ?? 0] ?? 1),
        pattern: pattern + 1,
        position: pattern < 0 ? 0 : (positionOf[pattern] ?? 0),
        cycles: lost.cost[at] ?? 0,
      }
    }),
  })
}
