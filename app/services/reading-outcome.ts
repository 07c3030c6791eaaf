import { numberFormats } from '../contract/format-number.ts'
import { counted } from '../contract/plan-words.ts'
import type { NetlistInspection } from '../contract/shapes/netlist.ts'
import type { PatternInspection } from '../contract/shapes/pattern-set.ts'
import type { Outcome } from './tasks.ts'

const formats = numberFormats('en')

/** Returns what came of reading files: what was read, and how many errors and warnings there are. */
export function readingOutcome({ account, diagnostics }: NetlistInspection | PatternInspection): Outcome {
  const found = (['error', 'warning'] as const).flatMap((kind) => {
    const count = diagnostics.filter(({ severity }) => severity === kind).length
    return count === 0 ? [] : [counted(count, kind, formats)]
  })
  if (account === null) return { failed: [...found, 'nothing to save'].join(', ') }
  const read =
    'patterns' in account
      ? counted(account.patterns, 'pattern', formats)
      : counted(account.gates, 'gate', formats)
  const words = [read, ...found].join(', ')
  return diagnostics.some(({ severity }) => severity === 'error') ? { failed: words } : words
}
