export type DeskProgress = {
  readonly phase: string
  readonly share: number | null
  readonly rate?: number
}

/** What a job gets to know and to tell while it is done. */
export type DeskContext<Part> = {
  readonly threads: DeskThreads
  readonly signal: AbortSignal
  /** True once the job is to stop; also in the middle of a loop that hears no messages. */
  isCancelled(): boolean
  report(progress: DeskProgress): void
  /** Hands over a part of the result; the buffers go with it. */
  send(part: Part, buffers: readonly ArrayBuffer[]): void
}

/** What a desk needs to start threads of its own. */
export type DeskThreads = {
  readonly simulateScript: string
  readonly kernel: string
  readonly count: number
}
