/** One input file: its name as the user knows it, and its whole text. Offsets count UTF-16 units of `text`. */
export type Source = {
  readonly name: string
  readonly text: string
}

/** A half-open range of offsets, `start` to `end`, into the text of one source. */
export type Span = {
  readonly start: number
  readonly end: number
}
