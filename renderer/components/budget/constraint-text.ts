import type { ConstraintKind, Constraints } from '../../../app/contract/shapes/budget.ts'

export type ConstraintTexts = Readonly<Record<ConstraintKind, string>>

/** What a constraint names: a pattern's number or a range such as "10-20". */
type Patterns = Constraints['keep'][number]

export const NO_TEXTS: ConstraintTexts = { keep: '', leaveOut: '', together: '', before: '', first: '' }

/** Returns constraints as they are typed: lists such as "3, 10-20"; groups and pairs stand on a line each. */
export function constraintTexts(constraints: Constraints | null): ConstraintTexts {
  if (constraints === null) return NO_TEXTS
  return {
    keep: constraints.keep.join(', '),
    leaveOut: constraints.leaveOut.join(', '),
    together: constraints.together.map((group) => group.join(', ')).join('\n'),
    before: constraints.before.map(([a, b]) => `${a} before ${b}`).join('\n'),
    first: constraints.first.join(', '),
  }
}

/** Returns the constraints that texts make, null where they make none, and what is wrong in which field. */
export function readConstraintTexts(
  texts: ConstraintTexts,
  patterns: number,
): { readonly constraints: Constraints | null; readonly errors: Partial<Record<ConstraintKind, string>> } {
  const errors: Partial<Record<ConstraintKind, string>> = {}
  const read = <T>(kind: ConstraintKind, work: (text: string) => T, nothing: T): T => {
    try {
      return work(texts[kind])
    } catch (error) {
      if (!(error instanceof Unreadable)) throw error
      errors[kind] = error.message
      return nothing
    }
  }
  const list = (text: string): Patterns[] => readList(text, patterns)
  const constraints: Constraints = {
    keep: read('keep', list, []),
    leaveOut: read('leaveOut', list, []),
    together: read('together', (text) => linesOf(text).map((line) => readGroup(line, patterns)), []),
    before: read('before', (text) => linesOf(text).flatMap((line) => readPairs(line, patterns)), []),
    first: read('first', list, []),
  }
  const isEmpty = Object.values(constraints).every(({ length }) => length === 0)
  return { constraints: isEmpty ? null : constraints, errors }
}

class Unreadable extends Error {}

function linesOf(text: string): string[] {
  return text
    .split(/[\n;]/)
    .map((line) => line.trim())
    .filter((line) => line !== '')
}

function readList(text: string, patterns: number): Patterns[] {
  const joined = text.replace(/\s*[-–]\s*/g, '-')
  return joined
    .split(/[\s,;]+/)
    .filter((part) => part !== '')
    .map((part) => readPatterns(part, patterns))
}

function readPatterns(part: string, patterns: number): Patterns {
  const found = /^(\d{1,9})(?:-(\d{1,9}))?$/.exec(part)
  if (found === null) throw new Unreadable(`“${part}” is no pattern number and no range such as 10-20.`)
  const from = Number(found[1])
  const to = Number(found[2] ?? found[1])
  if (from > to) throw new Unreadable(`The range ${from}-${to} ends before it begins.`)
  if (from < 1 || to > patterns) {
    throw new Unreadable(
      `There is no pattern ${from < 1 ? from : to}: they are numbered from 1 to ${patterns}.`,
    )
  }
  return from === to ? from : `${from}-${to}`
}

function readGroup(line: string, patterns: number): Patterns[] {
  const group = readList(line, patterns)
  if (group.length === 1 && typeof group[0] === 'number') {
    throw new Unreadable(`“${line}” is one pattern alone: a group has two or more, such as 4, 9.`)
  }
  return group
}

function readPairs(line: string, patterns: number): Constraints['before'] {
  const sides = line.split(/\s+before\s+/)
  if (sides.length < 2) throw new Unreadable(`“${line}” is no pair such as 3 before 7.`)
  const lists = sides.map((side) => readList(side, patterns))
  if (lists.some(({ length }) => length === 0)) {
    throw new Unreadable(`“${line}” names no pattern on one side of “before”.`)
  }
  // "3 before 7 before 9" is two pairs.
  return lists
    .slice(1)
    .flatMap((later, at) => (lists[at] ?? []).flatMap((a) => later.map((b): [Patterns, Patterns] => [a, b])))
}
