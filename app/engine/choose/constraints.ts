/** What the test floor imposes on a choice, in pattern indices from 0. */
export type Constraints = {
  /** Patterns that every choice holds. */
  readonly keep: readonly number[]
  /** Patterns that never run. */
  readonly leaveOut: readonly number[]
  /** Groups that run one straight after the other, all of them or none. */
  readonly together: readonly (readonly number[])[]
  /** Pairs a, b: no choice runs b unless a has run before it. */
  readonly before: readonly (readonly [number, number])[]
  /** Patterns that run first, in this order; they are kept too. */
  readonly first: readonly number[]
}

export type ConstraintKind = keyof Constraints

export const CONSTRAINT_KINDS: readonly ConstraintKind[] = ['keep', 'leaveOut', 'together', 'before', 'first']

export const NO_CONSTRAINTS: Constraints = { keep: [], leaveOut: [], together: [], before: [], first: [] }
