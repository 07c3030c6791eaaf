import type { Source, Span } from '../../source/source.ts'

/** A pattern statement of IEEE 1450-1999 (clause 22), as far as it moves values or time. */
export type Statement =
  | {
      readonly kind: 'vector' | 'condition' | 'fixed'
      readonly span: Span
      readonly assignments: readonly Assignment[]
    }
  | { readonly kind: 'table'; readonly span: Span; readonly name: string }
  | {
      readonly kind: 'call' | 'macro'
      readonly span: Span
      readonly name: string
      readonly assignments: readonly Assignment[]
    }
  | { readonly kind: 'shift'; readonly span: Span; readonly body: readonly Statement[] }
  | {
      readonly kind: 'loop'
      readonly span: Span
      readonly count: number
      readonly body: readonly Statement[]
    }
  | { readonly kind: 'match-loop'; readonly span: Span; readonly body: readonly Statement[] }
  | { readonly kind: 'stop'; readonly span: Span }

/**
 * `reference = data`. The data are the waveform characters `text[start … end)`: a stretch of the file itself where they
 * stand there as they are, else a text of their own with repeats and bases expanded. '#' and '%' stand for parameters.
 */
export type Assignment = {
  readonly source: Source
  readonly span: Span
  /** The name of a signal or group, or the text of an expression that starts with an apostrophe. */
  readonly reference: string
  readonly text: string
  readonly start: number
  readonly end: number
}
