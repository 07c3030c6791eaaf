import type { ChoiceTask } from './choice-task.ts'
import { wholeWeights } from './whole-weights.ts'

/**
 * Which units detect which faults, with equal rows merged. A row's bits come in levels: bit of unit u at level j is set
 * where at least j + 1 of the unit's patterns detect the row. Only units of several patterns have levels above 0, and
 * only as many as count (the task's `detections`).
 *
 * Memory: level j of a row are the words `rowAt[row] + levelStart[j] … rowAt[row] + levelStart[j + 1] − 1`. Where every
 * pattern is a unit of its own these are the words of the detection matrix itself, not a copy.
 */
export type UnitMatrix = {
  readonly nRows: number
  readonly nUnits: number
  readonly words: Uint32Array
  /** Length nRows: where each row starts in `words`. */
  readonly rowAt: Uint32Array
  /** Length levels + 1, in words from the start of a row. */
  readonly levelStart: Uint32Array
  /** Length 32 × levelStart[levels]: the unit of each bit of a row, −1 for padding. */
  readonly unitOfBit: Int32Array
  /** CSR over units: the bit of each of its levels, ascending. */
  readonly bitStart: Uint32Array
  readonly bits: Uint32Array
  /** Length nRows: whole numbers, sums of the merged rows' weights times weightScale. */
  readonly weight: Float64Array
  readonly weightScale: number
  /** Length matrix.nRows: the merged row that stands for each row of the detection matrix; −1 where no unit detects it. */
  readonly mergedRow: Int32Array
  /** Length nUnits. */
  readonly unitCost: Float64Array
  readonly unitSize: Float64Array
}

/**
 * Returns the matrix of a task's units. Rows of weight 0 stay; rows that only left-out patterns detect go. Null when `goOn`,
 * asked every few milliseconds, said no.
 */
export function buildUnitMatrix(task: ChoiceTask, goOn: () => boolean = () => true): UnitMatrix | null {
  const { matrix, rules, costs } = task
  const { unitStart, unitPatterns, nUnits } = rules
  const layout = layOutBits(task)
  const everyPatternAlone = nUnits === matrix.nPatterns
  const wordsPerRow = everyPatternAlone ? matrix.wordsPerRow : layout.levelStart[layout.levelStart.length - 1]
  const words = everyPatternAlone ? matrix.words : gatherUnits(task, layout, wordsPerRow, goOn)
  if (words === null) return null

  const { whole, scale } = wholeWeights(task.weights)
  const merged = mergeRows(words, matrix.nRows, wordsPerRow, goOn)
  if (merged === null) return null
  const weight = new Float64Array(merged.rowAt.length)
  for (let row = 0; row < matrix.nRows; row++) {
    if (merged.mergedRow[row] >= 0) weight[merged.mergedRow[row]] += whole[row]
  }

  const unitCost = new Float64Array(nUnits)
  const unitSize = new Float64Array(nUnits)
  for (let unit = 0; unit < nUnits; unit++) {
    unitSize[unit] = unitStart[unit + 1] - unitStart[unit]
    for (let at = unitStart[unit]; at < unitStart[unit + 1]; at++) unitCost[unit] += costs[unitPatterns[at]]
  }
  return {
    nRows: weight.length,
    nUnits,
    words,
    ...layout,
    ...merged,
    weight,
    weightScale: scale,
    unitCost,
    unitSize,
  }
}

/** Rows between two questions whether to go on. */
const ROWS_AT_A_TIME = 1024

type BitLayout = Pick<UnitMatrix, 'levelStart' | 'unitOfBit' | 'bitStart' | 'bits'>

function layOutBits({ matrix, rules, detections }: ChoiceTask): BitLayout {
  const { unitStart, nUnits } = rules
  const levelsOf = (unit: number): number => Math.min(detections, unitStart[unit + 1] - unitStart[unit])
  let levels = 1
  const bitStart = new Uint32Array(nUnits + 1)
  for (let unit = 0; unit < nUnits; unit++) {
    levels = Math.max(levels, levelsOf(unit))
    bitStart[unit + 1] = bitStart[unit] + levelsOf(unit)
  }
  const bits = new Uint32Array(bitStart[nUnits])
  const levelStart = new Uint32Array(levels + 1)
  const unitOfBit: number[] = []
  for (let level = 0; level < levels; level++) {
    for (let unit = 0; unit < nUnits; unit++) {
      if (levelsOf(unit) <= level) continue
      bits[bitStart[unit] + level] = unitOfBit.length
      unitOfBit.push(unit)
    }
    const full = nUnits === matrix.nPatterns ? 32 * matrix.wordsPerRow : Math.ceil(unitOfBit.length / 32) * 32
    while (unitOfBit.length < full) unitOfBit.push(-1)
    levelStart[level + 1] = unitOfBit.length / 32
  }
  return { levelStart, unitOfBit: Int32Array.from(unitOfBit), bitStart, bits }
}

function gatherUnits(
  { matrix, rules }: ChoiceTask,
  { bitStart, bits }: BitLayout,
  wordsPerRow: number,
  goOn: () => boolean,
): Uint32Array | null {
  const { unitStart, unitPatterns, nUnits } = rules
  const words = new Uint32Array(matrix.nRows * wordsPerRow)
  for (let row = 0; row < matrix.nRows; row++) {
    if (row % ROWS_AT_A_TIME === 0 && !goOn()) return null
    const from = row * matrix.wordsPerRow
    const to = row * wordsPerRow
    for (let unit = 0; unit < nUnits; unit++) {
      let next = bitStart[unit]
      for (let at = unitStart[unit]; at < unitStart[unit + 1] && next < bitStart[unit + 1]; at++) {
        const pattern = unitPatterns[at]
        if (((matrix.words[from + (pattern >>> 5)] >>> (pattern & 31)) & 1) === 0) continue
        words[to + (bits[next] >>> 5)] |= 1 << (bits[next] & 31)
        next++
      }
    }
  }
  return words
}

/** Returns where each distinct row that is not empty starts, in order of first appearance, and which one each row equals. */
function mergeRows(
  words: Uint32Array,
  nRows: number,
  wordsPerRow: number,
  goOn: () => boolean,
): { rowAt: Uint32Array; mergedRow: Int32Array } | null {
  const mergedRow = new Int32Array(nRows).fill(-1)
  const rowAt: number[] = []
  const byHash = new Map<number, number[]>()
  for (let row = 0; row < nRows; row++) {
    if (row % ROWS_AT_A_TIME === 0 && !goOn()) return null
    const at = row * wordsPerRow
    let hash = 0
    let any = 0
    for (let word = 0; word < wordsPerRow; word++) {
      any |= words[at + word]
      hash = Math.imul(hash ^ words[at + word], 0x9e3779b1)
      hash ^= hash >>> 15
    }
    if (any === 0) continue
    let candidates = byHash.get(hash)
    if (candidates === undefined) byHash.set(hash, (candidates = []))
    let same = candidates.find((one) => equalWords(words, rowAt[one], at, wordsPerRow))
    if (same === undefined) {
      same = rowAt.length
      rowAt.push(at)
      candidates.push(same)
    }
    mergedRow[row] = same
  }
  return { rowAt: Uint32Array.from(rowAt), mergedRow }
}

function equalWords(words: Uint32Array, a: number, b: number, length: number): boolean {
  for (let word = 0; word < length; word++) if (words[a + word] !== words[b + word]) return false
  return true
}
