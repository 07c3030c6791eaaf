import type { FaultList } from '../faults/fault-list.ts'
import type { FaultCounts } from './test-coverage.ts'

/**
 * Returns the accounts of a fault list, or of one block of it: faults, those in classes proven untestable with free
 * inputs (`untestable`, length nClasses, null where nothing was proven) and those on lines of the scan path.
 */
export function countFaults(
  faults: FaultList,
  untestable: Uint8Array | null,
  isIncluded: (fault: number) => boolean = () => true,
): FaultCounts {
  const counts = { all: 0, untestable: 0, byChainTest: 0 }
  for (let fault = 0; fault < faults.nFaults; fault++) {
    if (!isIncluded(fault)) continue
    counts.all++
    if (faults.lines.byChainTest[fault >>> 1] === 1) counts.byChainTest++
    else if (untestable !== null && untestable[faults.classOf[fault]] === 1) counts.untestable++
  }
  return counts
}
