import { faultName, type FaultList } from '../../engine/faults/fault-list.ts'
import { stateOfFault } from '../../engine/faults/fault-state.ts'
import type { DetectionProfile } from '../../engine/simulate/detection-profile.ts'
import { csvRow } from '../../report/csv-row.ts'

const ROWS_PER_PART = 2000

/**
 * Gives the rows of a table with every fault, uncollapsed: its name, its state, the first pattern that detects it, from 1
 * and empty where none does, and how many do, as far as they were counted.
 */
export function* faultRows(faults: FaultList, profile: DetectionProfile): Generator<string, void, undefined> {
  let part = csvRow(['fault', 'state', 'first_pattern', 'detections'])
  for (let fault = 0; fault < faults.nFaults; fault++) {
    const state = stateOfFault(faults, profile, fault)
    const group = faults.classOf[fault] ?? 0
    const isDetected = state === 'detected'
    part += csvRow([
      faultName(faults, fault),
      state,
      isDetected ? (profile.first[group] ?? 0) + 1 : null,
      isDetected ? (profile.detections[group] ?? 0) : 0,
    ])
    if (fault % ROWS_PER_PART === ROWS_PER_PART - 1) {
      yield part
      part = ''
    }
  }
  yield part
}
