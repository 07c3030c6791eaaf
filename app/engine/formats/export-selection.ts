import type { Circuit } from '../circuit/circuit.ts'
import type { GoodResponse } from '../simulate/good-machine.ts'
import { bitAt, type PatternSet } from '../simulate/pattern-set.ts'

/** What every writer of patterns gets: the set, its circuit, which patterns in which order, and the fault-free response. */
export type ExportSelection = {
  readonly patterns: PatternSet
  readonly circuit: Circuit
  /** Pattern indices from 0, in the order in which they are to be applied. */
  readonly sequence: ArrayLike<number>
  /** Needed where the set expects nothing itself; without it the export then expects X. */
  readonly response?: GoodResponse | null
}

/** Returns the patterns that can be written: those that count for time alone have vectors that a set does not hold. */
export function writablePatterns({ patterns, sequence }: ExportSelection): number[] {
  return Array.from(sequence).filter((pattern) => patterns.timeOnly?.[pattern] !== 1)
}

/** Returns '0', '1' or X's sign for an input row of a pattern. */
export function inputSign(patterns: PatternSet, row: number, pattern: number, unknown: string): string {
  if (patterns.unknown !== null && bitAt(patterns.unknown, row, pattern)) return unknown
  return bitAt(patterns.value, row, pattern) ? '1' : '0'
}

/**
 * Returns 'L', 'H' or 'X' for a response row of a pattern: X where it is masked or no value is known. A flip-flop that does
 * not capture expects what was loaded, if `heldState` is asked for, else X.
 */
export function expectedSign(
  { patterns, circuit, response }: ExportSelection,
  row: number,
  pattern: number,
  heldState = false,
): 'L' | 'H' | 'X' {
  const { expected, observed } = patterns
  const isHeld = row >= circuit.outputs.length && patterns.withoutCapture?.[pattern] === 1
  if (isHeld && !heldState) return 'X'
  if (!isHeld && observed !== null && !bitAt(observed, row, pattern)) return 'X'
  if (expected !== null && bitAt(expected.care, row, pattern)) {
    return bitAt(expected.value, row, pattern) ? 'H' : 'L'
  }
  if (isHeld || !response) return 'X'
  return bitAt(response.one, row, pattern) ? 'H' : bitAt(response.zero, row, pattern) ? 'L' : 'X'
}

/** What a user must know before an order and cut are exported, in sentences; empty where nothing is lost. */
export function exportWarnings(selection: ExportSelection): string[] {
  const { patterns, sequence } = selection
  const warnings: string[] = []
  const left = sequence.length - writablePatterns(selection).length
  if (left > 0) {
    warnings.push(
      `${left === 1 ? '1 pattern counts' : `${left} patterns count`} for time alone and ${left === 1 ? 'is' : 'are'} left out: more happens in ${left === 1 ? 'it' : 'them'} than one load and one capture.`,
    )
  }
  let moved = 0
  for (let at = 0; at < sequence.length; at++) {
    const pattern = sequence[at]
    if (
      patterns.dependsOnPrevious?.[pattern] === 1 &&
      (at === 0 ? pattern > 0 : sequence[at - 1] !== pattern - 1)
    ) {
      moved++
    }
  }
  if (moved > 0) {
    warnings.push(
      `${moved === 1 ? '1 pattern depends' : `${moved} patterns depend`} on the state that the pattern before left, and no longer ${moved === 1 ? 'follows' : 'follow'} it: what ${moved === 1 ? 'it expects' : 'they expect'} may not hold.`,
    )
  }
  if (patterns.expected === null && !selection.response) {
    warnings.push('The set expects nothing and no response was computed: the export compares no output.')
  }
  return warnings
}
