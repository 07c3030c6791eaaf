import type { Figure } from '../contract/format-number.ts'
import type { Phrase } from '../contract/plan-words.ts'

/** A report as its pages say it, before it becomes HTML or PDF. All texts are plain. */
export type ReportDocument = {
  readonly title: string
  /** Stand in the head of every page, left, middle and right. */
  readonly heads: readonly [string, string, string]
  readonly author: string | null
  readonly paper: 'A4' | 'Letter'
  readonly pages: readonly ReportPage[]
}

/** A part that starts on a new sheet; long tables may take more than one. */
export type ReportPage = {
  readonly blocks: readonly Block[]
  /** Stands at the foot of the page, left. */
  readonly foot: string
}

export type Block =
  | { readonly kind: 'title'; readonly text: string }
  | { readonly kind: 'heading'; readonly text: string }
  | { readonly kind: 'lead'; readonly phrases: readonly Phrase[] }
  | { readonly kind: 'text'; readonly text: string }
  | { readonly kind: 'caution'; readonly text: string }
  | { readonly kind: 'figures'; readonly figures: readonly LabelledFigure[] }
  | { readonly kind: 'chart'; readonly chart: Chart; readonly caption: string }
  | { readonly kind: 'table'; readonly table: Table }
  | { readonly kind: 'list'; readonly items: readonly string[] }
  | { readonly kind: 'code'; readonly text: string }
  | {
      readonly kind: 'columns'
      readonly columns: readonly (readonly Block[])[]
      readonly widths: readonly number[]
    }

export type LabelledFigure = { readonly label: string; readonly figure: Figure; readonly note: string }

/** A drawing in its own units. */
export type Chart = {
  readonly width: number
  readonly height: number
  /** What it shows, for those who can't see it. */
  readonly label: string
  /** The elements inside `<svg>`. */
  readonly markup: string
}

export type Table = {
  readonly columns: readonly { readonly head: string; readonly holds: 'text' | 'number' | 'code' }[]
  readonly rows: readonly (readonly string[])[]
  /** The row of the budget itself, from 0; null where there is none. */
  readonly marked: number | null
}
