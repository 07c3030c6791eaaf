import { WORDS_PER_BLOCK } from '../../simulate/pattern-set.ts'
import { CHARACTERS, COMPARE_MASK, Compare, DRIVE_MASK, Drive, type CompiledTable } from './compile-table.ts'
import type { ChainMap } from './match-netlist.ts'

/** Characters passed for one signal: those at text[from], text[from + stride] and so on, `count` of them. */
export type PassedData = {
  readonly text: string
  readonly from: number
  readonly stride: number
  readonly count: number
}

/** Where one pattern's flip-flops stand in two pieces of planes: a bit of one word of each row from `firstRow` on. */
export type PatternColumn = {
  /** Set where a value is 1. */
  readonly ones: Uint32Array
  /** Set where there is a value. */
  readonly known: Uint32Array
  readonly firstRow: number
  readonly word: number
  readonly bit: number
}

/**
 * Writes what scan-in data leave in a chain after `shiftsAfter` pulses more: the last character is then that many cells
 * behind the first one, and earlier characters are further on. Characters that drive neither 0 nor 1 leave X.
 */
export function writeLoad(
  chain: ChainMap,
  data: PassedData,
  table: CompiledTable,
  shiftsAfter: number,
  column: PatternColumn,
): void {
  const { text, from, stride, count } = data
  const { flipFlop, loadInverted } = chain
  const { ones, known, firstRow, word, bit } = column
  const row = table.row[chain.scanInSignal] * CHARACTERS
  const firstCell = count - 1 + shiftsAfter
  for (let index = Math.max(0, firstCell - flipFlop.length + 1); index < count; index++) {
    const code = text.charCodeAt(from + index * stride)
    const level = code < CHARACTERS ? table.flags[row + code] & DRIVE_MASK : Drive.Unknown
    if (level !== Drive.Low && level !== Drive.High) continue
    const cell = firstCell - index
    const at = (firstRow + flipFlop[cell]) * WORDS_PER_BLOCK + word
    known[at] |= bit
    if ((level === Drive.High) !== (loadInverted[cell] === 1)) ones[at] |= bit
  }
}

/**
 * Writes what scan-out data expect of the flip-flops, the first character of the cell `shiftsBefore` before the last one.
 * Returns how many characters compare with neither 0 nor 1, and how many stand for flip-flops that `holds` says did not
 * capture; both are left out. Scan-outs pass what was shifted in once the chain is through: that is left out too.
 */
export function writeUnload(
  chain: ChainMap,
  data: PassedData,
  table: CompiledTable,
  shiftsBefore: number,
  column: PatternColumn,
  holds: ((flipFlop: number) => boolean) | null,
): { readonly others: number; readonly held: number } {
  const { text, from, stride, count } = data
  const { flipFlop, unloadInverted } = chain
  const { ones, known, firstRow, word, bit } = column
  const row = table.row[chain.scanOutSignal] * CHARACTERS
  const lastCell = flipFlop.length - 1 - shiftsBefore
  let others = 0
  let held = 0
  for (let index = 0; index < count && index <= lastCell; index++) {
    const code = text.charCodeAt(from + index * stride)
    const compare = code < CHARACTERS ? table.flags[row + code] & COMPARE_MASK : Compare.None
    if (compare === Compare.None) continue
    const cell = lastCell - index
    if (compare === Compare.Other) others++
    else if (holds?.(flipFlop[cell]) === true) held++
    else {
      const at = (firstRow + flipFlop[cell]) * WORDS_PER_BLOCK + word
      known[at] |= bit
      if ((compare === Compare.High) !== (unloadInverted[cell] === 1)) ones[at] |= bit
    }
  }
  return { others, held }
}

/** Returns the first character of the data that compares, −1 where none does. */
export function firstCompare(data: PassedData, table: CompiledTable, signal: number): number {
  const { text, from, stride, count } = data
  const row = table.row[signal] * CHARACTERS
  for (let index = 0; index < count; index++) {
    const code = text.charCodeAt(from + index * stride)
    if (code < CHARACTERS && (table.flags[row + code] & COMPARE_MASK) !== Compare.None) return code
  }
  return -1
}
