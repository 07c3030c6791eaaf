import type { NumberFormats } from '../../../app/contract/format-number.ts'
import { counted } from '../../../app/contract/plan-words.ts'
import type { ConstraintCosts, ConstraintKind, Constraints } from '../../../app/contract/shapes/budget.ts'

/** Groups and pairs are written out up to so many patterns; beyond that their number says enough. */
const NAMED = 3

type Patterns = Constraints['keep'][number]

/** Constraints that name single patterns. */
export type ListKind = 'keep' | 'leaveOut' | 'first'

type Range = readonly [from: number, to: number]

function rangeOf(entry: Patterns): Range {
  if (typeof entry === 'number') return [entry, entry]
  const [from = 0, to = from] = entry.split('-').map(Number)
  return [from, to]
}

/** Returns how many patterns entries such as 7 or "10-20" name. */
export function countPatterns(entries: readonly Patterns[]): number {
  return entries.reduce<number>((sum, entry) => {
    const [from, to] = rangeOf(entry)
    return sum + to - from + 1
  }, 0)
}

function holds([from, to]: Range, pattern: number): boolean {
  return pattern >= from && pattern <= to
}

function names(entries: readonly Patterns[], pattern: number): boolean {
  return entries.some((entry) => holds(rangeOf(entry), pattern))
}

/** Returns a function that says what constraints hold for a pattern, in a few words; empty where none do. */
export function ruleReader(constraints: Constraints | null): (pattern: number) => string {
  if (constraints === null) return () => ''
  const keep = constraints.keep.map(rangeOf)
  const leaveOut = constraints.leaveOut.map(rangeOf)
  const first = constraints.first.map(rangeOf)
  const together = constraints.together.map((group) => group.map(rangeOf))
  const before = constraints.before.map(([a, b]) => [rangeOf(a), rangeOf(b)] as const)
  const isIn = (ranges: readonly Range[], pattern: number): boolean =>
    ranges.some((range) => holds(range, pattern))
  return (pattern) => {
    const place = placeIn(first, pattern)
    const group = together.find((ranges) => isIn(ranges, pattern))
    const later = before.flatMap(([a, b]) => (holds(a, pattern) ? [b] : []))
    const earlier = before.flatMap(([a, b]) => (holds(b, pattern) ? [a] : []))
    const rules = [
      ...(isIn(leaveOut, pattern) ? ['left out'] : []),
      ...(place > 0 ? [`first, place ${place}`] : isIn(keep, pattern) ? ['kept'] : []),
      ...(group ? [`with ${listed(group.flatMap((range) => rangeWithout(range, pattern)))}`] : []),
      ...(earlier.length > 0 ? [`after ${listed(earlier)}`] : []),
      ...(later.length > 0 ? [`before ${listed(later)}`] : []),
    ]
    return rules.join('; ')
  }
}

/** The place, from 1, at which ranges one after the other name a pattern; 0 where they do not. */
function placeIn(ranges: readonly Range[], pattern: number): number {
  let place = 1
  for (const [from, to] of ranges) {
    if (holds([from, to], pattern)) return place + pattern - from
    place += to - from + 1
  }
  return 0
}

function rangeWithout([from, to]: Range, pattern: number): Range[] {
  if (!holds([from, to], pattern)) return [[from, to]]
  const sides: readonly Range[] = [
    [from, pattern - 1],
    [pattern + 1, to],
  ]
  return sides.filter(([start, end]) => start <= end)
}

function listed(ranges: readonly Range[]): string {
  const shown = ranges.slice(0, NAMED).map(([from, to]) => (from === to ? `${from}` : `${from}–${to}`))
  return ranges.length > NAMED ? `${shown.join(', ')} …` : shown.join(', ')
}

/** Returns whether a pattern is named by lists of kept, left out or first ones. */
export function isListed(constraints: Constraints | null, kind: ListKind, pattern: number): boolean {
  return constraints !== null && names(constraints[kind], pattern)
}

/** Returns the constraints with a pattern added to one of the lists, and taken from those that it stood in. */
export function withRule(constraints: Constraints | null, kind: ListKind, pattern: number): Constraints {
  const rest = outOfLists(constraints ?? NO_CONSTRAINTS, pattern)
  return { ...rest, [kind]: [...rest[kind], pattern] }
}

/** Returns the constraints with nothing said of a pattern; null where nothing is left of them. */
export function withoutRule(constraints: Constraints | null, pattern: number): Constraints | null {
  if (constraints === null) return null
  const rest: Constraints = {
    ...outOfLists(constraints, pattern),
    together: constraints.together
      .map((group) => without(group, pattern))
      .filter((group) => countPatterns(group) > 1),
    before: constraints.before.flatMap(([a, b]) =>
      without([a], pattern).flatMap((one) =>
        without([b], pattern).map((other): [Patterns, Patterns] => [one, other]),
      ),
    ),
  }
  return Object.values(rest).every(({ length }) => length === 0) ? null : rest
}

function outOfLists(constraints: Constraints, pattern: number): Constraints {
  const { keep, leaveOut, first } = constraints
  return {
    ...constraints,
    keep: without(keep, pattern),
    leaveOut: without(leaveOut, pattern),
    first: without(first, pattern),
  }
}

function without(entries: readonly Patterns[], pattern: number): Patterns[] {
  return entries.flatMap((entry) =>
    names([entry], pattern)
      ? rangeWithout(rangeOf(entry), pattern).map(([from, to]) => (from === to ? from : `${from}-${to}`))
      : [entry],
  )
}

const NO_CONSTRAINTS: Constraints = { keep: [], leaveOut: [], together: [], before: [], first: [] }

/** Returns what is in force, such as "12 patterns kept, 3 left out, 2 groups together". */
export function constraintsInWords(constraints: Constraints, formats: NumberFormats): string {
  const { keep, leaveOut, together, before, first } = constraints
  const count = (entries: readonly Patterns[]): string => formats.count(countPatterns(entries)).value
  const parts = [
    ...(keep.length > 0 ? [`${count(keep)} kept`] : []),
    ...(leaveOut.length > 0 ? [`${count(leaveOut)} left out`] : []),
    ...(together.length > 0 ? [`${counted(together.length, 'group', formats)} together`] : []),
    ...(before.length > 0 ? [`${counted(pairsIn(before), 'pair', formats)} in order`] : []),
    ...(first.length > 0 ? [`${count(first)} first`] : []),
  ]
  return parts.join(', ')
}

function pairsIn(before: Constraints['before']): number {
  return before.reduce((sum, [a, b]) => sum + countPatterns([a]) * countPatterns([b]), 0)
}

/** Returns what one kind of constraint costs at the cut: "Keeping 12 patterns costs 31 faults". */
export function costInWords(
  constraints: Constraints,
  { kind, cost, isInTheWay }: ConstraintCosts['rows'][number],
  unit: string,
  formats: NumberFormats,
): string {
  const what = subjectOf(constraints, kind, formats)
  if (isInTheWay) return `${what} leaves no choice that fits this cut.`
  const amount = formats.count(cost).value
  return cost > 0
    ? `${what} costs ${amount} ${cost === 1 ? unit.replace(/s$/, '') : unit}.`
    : `${what} costs nothing.`
}

function subjectOf(constraints: Constraints, kind: ConstraintKind, formats: NumberFormats): string {
  const { keep, leaveOut, together, before, first } = constraints
  const patterns = (entries: readonly Patterns[]): string =>
    counted(countPatterns(entries), 'pattern', formats)
  switch (kind) {
    case 'keep':
      return `Keeping ${patterns(keep)}`
    case 'leaveOut':
      return `Leaving out ${patterns(leaveOut)}`
    case 'together':
      return `Holding ${counted(together.length, 'group', formats)} together`
    case 'before':
      return `Holding ${counted(pairsIn(before), 'pair', formats)} in order`
    case 'first':
      return `Running ${patterns(first)} first`
  }
}
