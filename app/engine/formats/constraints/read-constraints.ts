import { type ChoiceRules, compileRules } from '../../choose/choice-rules.ts'
import { CONSTRAINT_KINDS, type ConstraintKind, type Constraints } from '../../choose/constraints.ts'
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

/** The most pairs that ranges in `before` may spell out. */
const MAX_PAIRS = 1_000_000

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
    return Array.from({ length: to - from + 1 }, (_, at) => from - 1 + at)
  }
  const listAt = (list: readonly (number | string)[] = [], ...path: (string | number)[]): number[] =>
    list.flatMap((entry, at) => patternsAt(entry, ...path, at))

  const before: [number, number][] = []
  const pairPath: number[] = []
  for (const [at, [a, b]] of (values.before ?? []).entries()) {
    const first = patternsAt(a, 'before', at, 0)
    const second = patternsAt(b, 'before', at, 1)
    if (before.length + first.length * second.length > MAX_PAIRS) {
      report(
        'limit',
        spanOf('before', at),
        `these ranges spell out more than ${MAX_PAIRS} pairs`,
        'Use shorter ranges',
      )
      break
    }
    for (const one of first) {
      for (const other of second) {
        before.push([one, other])
        pairPath.push(at)
      }
    }
  }
  const constraints: Constraints = {
    keep: listAt(values.keep, 'keep'),
    leaveOut: listAt(values.leaveOut, 'leaveOut'),
    together: (values.together ?? []).map((group, at) => listAt(group, 'together', at)),
    before,
    first: listAt(values.first, 'first'),
  }
  if (found.length > 0) return { value: null, diagnostics: found }

  const { rules, contradiction } = compileRules(constraints, nPatterns)
  if (rules !== null) return { value: { constraints, rules }, diagnostics: [] }
  const { kind, index, message, hint } = contradiction
  const span =
    kind === 'before' ? spanOf('before', pairPath[index]) : spanOf(kind, ...entryOf(values, kind, index))
  report('contradiction', span, message, hint)
  return { value: null, diagnostics: found }
}

/** Returns where the constraint with that index stands in the file; a range makes several constraints of one entry. */
function entryOf(
  values: { readonly [kind in ConstraintKind]?: readonly unknown[] },
  kind: ConstraintKind,
  index: number,
): number[] {
  if (kind === 'together' || !CONSTRAINT_KINDS.includes(kind)) return [index]
  let passed = 0
  for (const [at, entry] of (values[kind] ?? []).entries()) {
    const range = typeof entry === 'string' ? rangeOf(entry) : null
    passed += range === null ? 1 : range[1] - range[0] + 1
    if (index < passed) return [at]
  }
  return []
}

function rangeOf(text: string): [number, number] | null {
  const parts = /^\s*(\d{1,9})\s*(?:[-\u2013]\s*(\d{1,9})\s*)?$/.exec(text)
  if (parts === null) return null
  return [Number(parts[1]), Number(parts[2] ?? parts[1])]
}
