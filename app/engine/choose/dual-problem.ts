import type { ChoiceTask } from './choice-task.ts'
import { buildUnitMatrix, type UnitMatrix } from './unit-matrix.ts'

/** Column indices of rows, or row indices of columns; the narrow form halves the memory where it suffices. */
export type Indices = Uint16Array | Uint32Array

/**
 * A choice as a linear problem: columns are the units that are free to be chosen, rows the faults that count only with
 * their help. Units are compared by what they detect, not by where they stand in the file: among equal ones only the
 * cheapest stays (when one detection is enough), and columns are sorted by their rows. So the order of the patterns, and
 * a pattern given twice, change nothing.
 */
export type DualProblem = {
  readonly nRows: number
  readonly nColumns: number
  /** CSR, length nRows + 1: the columns that detect a row, in no order; a column that counts twice stands there twice. */
  readonly rowStart: Uint32Array
  readonly rowItems: Indices
  /** The rows of column c, ascending, are `columnItems[columnAt[c]] … columnItems[columnEnd[c] − 1]`. */
  readonly columnAt: Uint32Array
  readonly columnEnd: Uint32Array
  readonly columnItems: Indices
  /** Whole numbers: weights times weightScale. */
  readonly weight: Float64Array
  readonly weightScale: number
  /** How many detections a row still needs, 1 or more. */
  readonly need: Uint8Array
  /** The unit of each column. */
  readonly unitOfColumn: Uint32Array
  readonly cost: Float64Array
  /** Weight (scaled) that the kept units detect by themselves, and what they cost. */
  readonly keptWeight: number
  readonly keptCost: number
  /** Length nRows: the row of the unit matrix that each row is. */
  readonly unitRow: Uint32Array
}

/** Returns the linear problem of a task, or null when `goOn`, asked every few milliseconds, said no. */
export function buildDualProblem(task: ChoiceTask, goOn: () => boolean = () => true): DualProblem | null {
  const { kept } = task.rules
  const units = buildUnitMatrix(task, goOn)
  if (units === null) return null
  const rows = listRows(units, kept, task.detections, goOn)
  if (rows === null) return null
  const { rowStart, rowItems, unitRow, need, keptWeight } = rows
  const nRows = unitRow.length

  const start = new Uint32Array(units.nUnits + 1)
  for (let at = 0; at < rowStart[nRows]; at++) start[rowItems[at] + 1]++
  for (let unit = 0; unit < units.nUnits; unit++) start[unit + 1] += start[unit]
  const columnItems = indices(start[units.nUnits], nRows)
  const filled = start.slice()
  for (let row = 0; row < nRows; row++) {
    if ((row & 511) === 0 && !goOn()) return null
    for (let at = rowStart[row]; at < rowStart[row + 1]; at++) columnItems[filled[rowItems[at]]++] = row
  }
  const unitOfColumn = distinctColumns(units, start, columnItems, task.detections)
  if (!goOn()) return null
  renumberRows(rowStart, rowItems, unitOfColumn, units.nUnits)

  let keptCost = 0
  for (let unit = 0; unit < units.nUnits; unit++) if (kept[unit] === 1) keptCost += units.unitCost[unit]
  return {
    nRows,
    nColumns: unitOfColumn.length,
    rowStart,
    rowItems,
    columnAt: unitOfColumn.map((unit) => start[unit]),
    columnEnd: unitOfColumn.map((unit) => start[unit + 1]),
    columnItems,
    weight: Float64Array.from(unitRow, (row) => units.weight[row]),
    weightScale: units.weightScale,
    need,
    unitOfColumn,
    cost: Float64Array.from(unitOfColumn, (unit) => units.unitCost[unit]),
    keptWeight,
    keptCost,
    unitRow,
  }
}

function indices(length: number, limit: number): Indices {
  return limit <= 65_536 ? new Uint16Array(length) : new Uint32Array(length)
}

type RowLists = Pick<DualProblem, 'rowStart' | 'rowItems' | 'unitRow' | 'need' | 'keptWeight'>

/** Lists, by unit, the rows that kept units leave open and the others can close. */
function listRows(
  units: UnitMatrix,
  kept: Uint8Array,
  detections: number,
  goOn: () => boolean,
): RowLists | null {
  const { nRows, words, rowAt, levelStart, unitOfBit, weight } = units
  const length = levelStart[levelStart.length - 1]
  const rowStart = [0]
  const unitRow: number[] = []
  const need: number[] = []
  let keptWeight = 0
  let items = indices(1 << 16, units.nUnits)
  let at = 0
  for (let row = 0; row < nRows; row++) {
    if ((row & 511) === 0 && !goOn()) return null
    if (at + 32 * length > items.length) {
      const larger = indices(Math.max(at + 32 * length, Math.ceil(items.length * 1.5)), units.nUnits)
      larger.set(items)
      items = larger
    }
    const from = at
    let byKept = 0
    for (let word = 0; word < length; word++) {
      for (let rest = words[rowAt[row] + word]; rest !== 0; rest &= rest - 1) {
        const unit = unitOfBit[32 * word + 31 - Math.clz32(rest & -rest)]
        if (kept[unit] === 1) byKept++
        else items[at++] = unit
      }
    }
    if (byKept < detections && byKept + at - from >= detections && weight[row] > 0) {
      rowStart.push(at)
      unitRow.push(row)
      need.push(detections - byKept)
    } else {
      at = from
      if (byKept >= detections) keptWeight += weight[row]
    }
  }
  return {
    rowStart: Uint32Array.from(rowStart),
    rowItems: items.slice(0, at),
    unitRow: Uint32Array.from(unitRow),
    need: Uint8Array.from(need),
    keptWeight,
  }
}

/**
 * Returns the units that make the columns, in the order of their rows; of units that detect the same, the cheapest one
 * alone where one detection is enough, since a second one adds nothing.
 */
function distinctColumns(
  { nUnits, unitCost }: UnitMatrix,
  start: Uint32Array,
  items: Indices,
  detections: number,
): Uint32Array {
  const compareRows = (a: number, b: number): number => {
    const length = Math.min(start[a + 1] - start[a], start[b + 1] - start[b])
    for (let at = 0; at < length; at++) {
      const difference = items[start[a] + at] - items[start[b] + at]
      if (difference !== 0) return difference
    }
    return start[a + 1] - start[a] - (start[b + 1] - start[b])
  }
  const sorted: number[] = []
  for (let unit = 0; unit < nUnits; unit++) if (start[unit + 1] > start[unit]) sorted.push(unit)
  sorted.sort((a, b) => compareRows(a, b) || unitCost[a] - unitCost[b])
  if (detections > 1) return Uint32Array.from(sorted)
  return Uint32Array.from(sorted.filter((unit, at) => at === 0 || compareRows(unit, sorted[at - 1]) !== 0))
}

/** Turns the units in the rows' lists into columns, in place; units without a column go. */
function renumberRows(
  rowStart: Uint32Array,
  items: Indices,
  unitOfColumn: Uint32Array,
  nUnits: number,
): void {
  const columnOf = new Int32Array(nUnits).fill(-1)
  for (const [column, unit] of unitOfColumn.entries()) columnOf[unit] = column
  let to = 0
  for (let row = 0, from = 0; row + 1 < rowStart.length; row++) {
    for (; from < rowStart[row + 1]; from++) {
      const column = columnOf[items[from]]
      if (column >= 0) items[to++] = column
    }
    rowStart[row + 1] = to
  }
}
