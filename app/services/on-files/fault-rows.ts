import type { ChoiceTask } from '../../engine/choose/choice-task.ts'
import { detectionsBy } from '../../engine/choose/detected-weight.ts'
import { faultName, type FaultList } from '../../engine/faults/fault-list.ts'
import { stateOfFault } from '../../engine/faults/fault-state.ts'
import type { DetectionProfile } from '../../engine/simulate/detection-profile.ts'
import { csvRow, type CsvCell } from '../../report/csv-row.ts'

const ROWS_PER_PART = 2000
const COLUMNS = ['fault', 'state', 'first_pattern', 'detections']

/**
 * Gives the rows of a table with every fault, uncollapsed: its name, its state, the first pattern that detects it, from 1
 * and empty where none does, and how many do, as far as they were counted.
 */
export function* faultRows(faults: FaultList, profile: DetectionProfile): Generator<string, void, undefined> {
  yield* inParts(faults, COLUMNS, (fault) => cellsOf(faults, profile, fault))
}

/** The same, and in further columns what the patterns of a choice detect, which stand in applied order. */
export function* budgetRows(
  { faults, result }: { readonly faults: FaultList; readonly result: { readonly profile: DetectionProfile } },
  task: ChoiceTask,
  chosen: Uint32Array,
): Generator<string, void, undefined> {
  const { matrix } = task
  const times = detectionsBy(task, chosen)
  const rowOf = new Int32Array(faults.nClasses).fill(-1)
  for (const [row, group] of matrix.classOfRow.entries()) rowOf[group] = row
  const placeOf = new Map(Array.from(chosen, (pattern, at) => [pattern, at + 1]))
  const firstPlace = (row: number): number | null => {
    let first: number | null = null
    for (let word = 0; word < matrix.wordsPerRow; word++) {
      for (let rest = matrix.words[row * matrix.wordsPerRow + word] ?? 0; rest !== 0; rest &= rest - 1) {
        const place = placeOf.get(32 * word + 31 - Math.clz32(rest & -rest))
        if (place !== undefined && (first === null || place < first)) first = place
      }
    }
    return first
  }
  yield* inParts(faults, [...COLUMNS, 'budget_detections', 'budget_first_place'], (fault) => {
    const row = faults.lines.byChainTest[fault >>> 1] === 1 ? -1 : (rowOf[faults.classOf[fault] ?? 0] ?? -1)
    const count = row < 0 ? 0 : (times[row] ?? 0)
    return [...cellsOf(faults, result.profile, fault), count, count === 0 ? null : firstPlace(row)]
  })
}

function cellsOf(faults: FaultList, profile: DetectionProfile, fault: number): CsvCell[] {
  const state = stateOfFault(faults, profile, fault)
  const group = faults.classOf[fault] ?? 0
  const isDetected = state === 'detected'
  return [
    faultName(faults, fault),
    state,
    isDetected ? (profile.first[group] ?? 0) + 1 : null,
    isDetected ? (profile.detections[group] ?? 0) : 0,
  ]
}

function* inParts(
  { nFaults }: FaultList,
  columns: readonly string[],
  cells: (fault: number) => readonly CsvCell[],
): Generator<string, void, undefined> {
  let part = csvRow(columns, '\n')
  for (let fault = 0; fault < nFaults; fault++) {
    part += csvRow(cells(fault), '\n')
    if (fault % ROWS_PER_PART === ROWS_PER_PART - 1) {
      yield part
      part = ''
    }
  }
  yield part
}
