import type { Span } from './source.ts'

export type Severity = 'error' | 'warning' | 'note'

/**
 * What went wrong, in a word that programs and tests can rely on.
 * A reader adds its own codes here; the text for people stands in each diagnostic's `message`.
 */
export type DiagnosticCode =
  // any reader
  | 'empty-file'
  | 'not-text'
  | 'wrong-file-type'
  | 'syntax'
  | 'limit'
  | 'truncated'
  | 'too-many'
  // key-and-value files
  | 'wrong-type'
  | 'missing-name'
  | 'contradiction'
  // circuits
  | 'unknown-gate'
  | 'pin-count'
  | 'undriven-net'
  | 'double-driver'
  | 'duplicate-declaration'
  | 'combinational-loop'
  | 'no-outputs'
  | 'unsupported-construct'
  | 'unknown-cell'
  | 'unknown-pin'
  | 'width-mismatch'
  | 'not-scanned'
  | 'ignored'
  // patterns
  | 'pattern-width'
  | 'unknown-character'
  | 'no-patterns'
  | 'unknown-signal'
  | 'missing-signal'
  | 'expected-mismatch'
  | 'unknown-name'
  | 'out-of-range'

/** One finding of a reader. `span` counts offsets in the file named; line and column are worked out when it is shown. */
export type Diagnostic = {
  readonly code: DiagnosticCode
  readonly severity: Severity
  readonly file: string
  readonly span: Span
  /** What was found and what was expected. */
  readonly message: string
  /** What to do about it. */
  readonly hint?: string
  readonly notes?: readonly DiagnosticNote[]
}

/** A second place that belongs to a finding, such as the first driver of a net that has two. */
export type DiagnosticNote = {
  readonly file: string
  readonly span: Span
  readonly message: string
}

/** What a reader returns: the value unless an error stands in the way, and every finding in the order of the text. */
export type Reading<T> = {
  readonly value: T | null
  readonly diagnostics: readonly Diagnostic[]
}

/** The most findings that a reader collects from one file before it stops with a 'too-many'. */
export const MAX_DIAGNOSTICS = 50
