/** Called by a reader every few megabytes with how far it is; `false` makes it stop with a reading without a value. */
export type ReadingProgress = (done: number, total: number) => boolean
