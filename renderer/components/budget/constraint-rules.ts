import type { NumberFormats } from '../../../app/contract/format-number.ts'
import { counted } from '../../../app/contract/plan-words.ts'
import type { ConstraintCosts, ConstraintKind, Constraints } from '../../../app/contract/shapes/budget.ts'

/** Groups and pairs are written out up to so many patterns; beyond that their number says enough. */
const NAMED = 3

type Patterns = Constraints['keep'][number]

/** Constraints that name single patterns. */
export type ListKind = 'keep' | 'leaveOut' | 'first'

/** Returns how many patterns entries such as 7 or "10-20" name. */
export function countPatterns(entries: readonly Patterns[]): number {
  return entries.reduce<number>((sum, entry) => {
    const [from = 0, to = from] = String(entry).split('-').map(Number)
    return sum + to - from + 1
  }, 0)
}

function names(entries: readonly Patterns[], pattern: number): boolean {
  return entries.some((entry) => {
    const [from = 0, to = from] = String(entry).split('-').map(Number)
    return pattern >= from && pattern <= to
  })
}

/** Returns what constraints say of one pattern, in a few words; empty where they say nothing. */
export function ruleOf(constraints: Constraints | null, pattern: number): string {
  if (constraints === null) return ''
  const { keep, leaveOut, together, before, first } = constraints
  const place = placeIn(first, pattern)
  const group = together.find((entries) => names(entries, pattern))
  const afterIt = before.filter(([a]) => names([a], pattern)).map(([, b]) => b)
  const beforeIt = before.filter(([, b]) => names([b], pattern)).map(([a]) => a)
  const rules = [
    ...(names(leaveOut, pattern) ? ['left out'] : []),
    ...(place > 0 ? [`first, place ${place}`] : names(keep, pattern) ? ['kept'] : []),
    ...(group ? [`with ${listed(othersOf(group, pattern))}`] : []),
    ...(beforeIt.length > 0 ? [`after ${listed(beforeIt)}`] : []),
    ...(afterIt.length > 0 ? [`before ${listed(afterIt)}`] : []),
  ]
  return rules.join('; ')
}

function placeIn(entries: readonly Patterns[], pattern: number): number {
  let place = 1
  for (const entry of entries) {
    const [from = 0, to = from] = String(entry).split('-').map(Number)
    if (pattern >= from && pattern <= to) return place + pattern - from
    place += to - from + 1
  }
  return 0
}

function othersOf(group: readonly Patterns[], pattern: number): Patterns[] {
  return group.flatMap((entry) => {
    if (!names([entry], pattern)) return [entry]
    const [from = 0, to = from] = String(entry).split('-').map(Number)
    return [...rangeOf(from, pattern - 1), ...rangeOf(pattern + 1, to)]
  })
}

function rangeOf(from: number, to: number): Patterns[] {
  return from > to ? [] : [from === to ? from : `${from}-${to}`]
}

function listed(entries: readonly Patterns[]): string {
  const shown = entries.slice(0, NAMED).map((entry) => String(entry).replace('-', '–'))
  return entries.length > NAMED ? `${shown.join(', ')} …` : shown.join(', ')
}

/** Returns whether a pattern is named by lists of kept, left out or first ones. */
export function isListed(
  constraints: Constraints | null,
  kind: 'keep' | 'leaveOut' | 'first',
  pattern: number,
): boolean {
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
  return entries.flatMap((entry) => (names([entry], pattern) ? othersOf([entry], pattern) : [entry]))
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
