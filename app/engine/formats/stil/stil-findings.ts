import { FindingList, type FindingExtras } from '../../source/finding-list.ts'
import type { DiagnosticCode } from '../../source/diagnostic.ts'
import type { Source, Span } from '../../source/source.ts'

/** Thrown inside the reader to give up one statement; caught where reading goes on after it. */
export class BrokenStatement extends Error {}

/** Thrown inside the reader to give up the reading: too many errors, or cancelled. */
export class ReadingStopped extends Error {}

/** The findings of one STIL reading, over the file and all that it includes. */
export class StilFindings extends FindingList {
  warnings = 0
  private readonly once = new Set<string>()

  /** Adds an error and gives up the statement that it stands in. */
  fail(code: DiagnosticCode, source: Source, span: Span, message: string, hint?: string): never {
    this.report(code, source, span, message, hint)
    throw new BrokenStatement()
  }

  /** Adds an error and goes on; what was found at that place before is not listed again. */
  report(code: DiagnosticCode, source: Source, span: Span, message: string, hint?: string): void {
    if (this.isFull) throw new ReadingStopped()
    const key = `${source.name} ${span.start} ${message}`
    if (this.once.has(key)) return
    this.once.add(key)
    this.error(code, source, span.start, span.end, message, extras(hint))
  }

  /** Adds a warning, or only counts it where one of the same code and subject was listed before. */
  caution(
    code: DiagnosticCode,
    source: Source,
    span: Span,
    subject: string,
    message: string,
    hint?: string,
  ): void {
    this.warnings++
    const key = `${code} ${subject}`
    if (this.once.has(key)) return
    this.once.add(key)
    this.warn(code, source, span.start, span.end, message, extras(hint))
  }
}

function extras(hint: string | undefined): FindingExtras {
  return hint === undefined ? {} : { hint }
}
