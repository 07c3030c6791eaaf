import { type ChoiceRules, compileRules } from '../../choose/choice-rules.ts'
import type { ConstraintPart } from '../../choose/constraint-costs.ts'
import type { ConstraintKind, Constraints } from '../../choose/constraints.ts'
import {
  type Diagnostic,
  type DiagnosticCode,
  MAX_DIAGNOSTICS,
  type Reading,
} from '../../source/diagnostic.ts'
import type { Source, Span } from '../../source/source.ts'
import { type Keys, readJsonObject } from '../json/read-json.ts'

export type ReadConstraints = {
  readonly constraints: Constraints
  readonly rules: ChoiceRules
  /** The entries of the file's lists, in its order of kinds. */
  readonly parts: readonly ConstraintPart[]
}

const PATTERN = { kind: 'number', min: 1, whole: true } as const
const PATTERN_OR_RANGE = { kind: 'either', of: [PATTERN, { kind: 'text' }] } as const
const PATTERNS = { kind: 'list', of: PATTERN_OR_RANGE } as const
const PAIR = { kind: 'list', of: PATTERN_OR_RANGE, minItems: 2, maxItems: 2 } as const

const KEYS = {
  keep: PATTERNS,
  leaveOut: PATTERNS,
  together: { kind: 'list', of: PATTERNS },
  before: { kind: 'list', of: PAIR },
  first: PATTERNS,
} as const satisfies Keys

/** The most patterns and pairs that all ranges together may spell out. */
const MAX_SPELLED_OUT = 5_000_000

/**
 * Reads constraints for a set of nPatterns patterns: a JSON object whose lists hold pattern numbers from 1 or ranges such
 * as "10-20". A range in a pair of `before` stands for each of its patterns.
 * Codes: those of readJsonObject, 'syntax' for a range that is none, 'out-of-range' for a pattern that is not in the set,
 * 'limit' for pairs without end, 'contradiction' for constraints that cannot hold together.
 */
export function readConstraints(source: Source, nPatterns: number): Reading<ReadConstraints> {
  const { value, diagnostics } = readJsonObject(source, 'constraints file', KEYS)
  if (value === null) return { value: null, diagnostics }
  const { values, spanOf } = value
  const found: Diagnostic[] = []
  const report = (code: DiagnosticCode, span: Span, message: string, hint: string): void => {
    if (found.length < MAX_DIAGNOSTICS)
      found.push({ code, severity: 'error', file: source.name, span, message, hint })
  }

  let spelledOut = 0
  const isTooMuch = (more: number, span: Span): boolean => {
    spelledOut += more
    if (spelledOut <= MAX_SPELLED_OUT) return false
    report(
      'limit',
      span,
      `up to here the ranges spell out more than ${MAX_SPELLED_OUT} entries`,
      'Use fewer or shorter ranges',
    )
    return true
  }
  const patternsAt = (entry: number | string, ...path: (string | number)[]): number[] => {
    const span = spanOf(...path)
    const range = typeof entry === 'number' ? [entry, entry] : rangeOf(entry)
    if (range === null) {
      report(
        'syntax',
        span,
        `found "${entry}" where a pattern number or a range is expected`,
        'Write 7 or "10-20"',
      )
      return []
    }
    const [from, to] = range
    if (from < 1 || to > nPatterns || from > to) {
      const what =
        from > to
          ? `the range "${entry}" ends before it begins`
          : `the set has no pattern ${from < 1 ? from : to}`
      report('out-of-range', span, what, `Patterns are numbered from 1 to ${nPatterns}, in file order`)
      return []
    }
    if (isTooMuch(to - from + 1, span)) return []
    return Array.from({ length: to - from + 1 }, (_, at) => from - 1 + at)
  }
  const parts: ConstraintPart[] = []
  const addTo = <T>(kind: ConstraintKind, list: T[], more: readonly T[], entry: unknown): void => {
    parts.push({ kind, from: list.length, to: list.length + more.length, text: JSON.stringify(entry) })
    for (const one of more) list.push(one)
  }
  const listOf = (kind: 'keep' | 'leaveOut' | 'first'): number[] => {
    const list: number[] = []
    for (const [at, entry] of (values[kind] ?? []).entries())
      addTo(kind, list, patternsAt(entry, kind, at), entry)
    return list
  }
  const pairsAt = (pair: readonly (number | string)[], at: number): [number, number][] => {
    const first = patternsAt(pair[0], 'before', at, 0)
    const second = patternsAt(pair[1], 'before', at, 1)
    if (isTooMuch(first.length * second.length, spanOf('before', at))) return []
    return first.flatMap((one) => second.map((other): [number, number] => [one, other]))
  }
  const keep = listOf('keep')
  const leaveOut = listOf('leaveOut')
  const together: number[][] = []
  for (const [at, group] of (values.together ?? []).entries()) {
    const patterns = group.flatMap((entry, item) => patternsAt(entry, 'together', at, item))
    addTo('together', together, [patterns], group)
  }
  const before: [number, number][] = []
  for (const [at, pair] of (values.before ?? []).entries()) addTo('before', before, pairsAt(pair, at), pair)
  const first = listOf('first')
  if (found.length > 0) return { value: null, diagnostics: found }

  const constraints: Constraints = { keep, leaveOut, together, before, first }
  const { rules, contradiction } = compileRules(constraints, nPatterns)
  if (rules !== null) return { value: { constraints, rules, parts }, diagnostics: [] }
  const { kind, index, message, hint } = contradiction
  const entry = parts
    .filter((part) => part.kind === kind)
    .findIndex(({ from, to }) => index >= from && index < to)
  report('contradiction', spanOf(kind, entry), message, hint)
  return { value: null, diagnostics: found }
}

function rangeOf(text: string): [number, number] | null {
  const parts = /^\s*(\d{1,9})\s*(?:[-\u2013]\s*(\d{1,9})\s*)?$/.exec(text)
  if (parts === null) return null
  return [Number(parts[1]), Number(parts[2] ?? parts[1])]
}
