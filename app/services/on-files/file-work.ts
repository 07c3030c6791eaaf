import type { Readable } from 'node:stream'
import { AppError } from '../../contract/errors.ts'
import type { Diagnostic, Reading } from '../../engine/source/diagnostic.ts'
import type { ReadingProgress } from '../../engine/source/reading-progress.ts'
import type { Source } from '../../engine/source/source.ts'

/** What work on files, without a project, needs of its caller. */
export type FileWork = {
  readonly signal: AbortSignal
  /** True once the work is to stop; also in the middle of a loop that hears no events. */
  isCancelled(): boolean
  /** What the file name `-` stands for. */
  readonly stdin: Readable
  report(progress: { readonly phase: string; readonly share: number | null }): void
  /** Takes the findings of a reader, with the texts that they point into. */
  tell(diagnostics: readonly Diagnostic[], sources: readonly Source[]): void
}

/**
 * Returns what a reader read, after its findings were told. Throws AppError 'bad-file' where there is none, 'cancelled'
 * where the reading was stopped.
 */
export function valueOf<T>(work: FileWork, reading: Reading<T>, sources: readonly Source[]): T {
  work.tell(reading.diagnostics, sources)
  throwIfCancelled(work)
  if (reading.value === null) throw new AppError('bad-file')
  return reading.value
}

export function throwIfCancelled(work: FileWork): void {
  if (work.isCancelled()) throw new AppError('cancelled')
}

/** Returns what readers and long choices report to: progress of the phase, and whether to go on. */
export function progressOf(work: FileWork, phase: string): ReadingProgress {
  return (done, total) => {
    work.report({ phase, share: total > 0 ? Math.min(1, done / total) : null })
    return !work.isCancelled()
  }
}

/** Returns what a long choice returned; null of one that was cancelled throws. */
export function wholeOf<T>(value: T | null): T {
  if (value === null) throw new AppError('cancelled')
  return value
}
