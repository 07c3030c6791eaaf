import { MAX_DIAGNOSTICS, type Diagnostic, type DiagnosticCode, type DiagnosticNote } from './diagnostic.ts'
import type { Source, Span } from './source.ts'

/** What a finding may add to its message. */
export type FindingExtras = { readonly hint?: string | null; readonly notes?: readonly DiagnosticNote[] }

/**
 * Collects a reader's findings: errors up to MAX_DIAGNOSTICS, after which `isFull` tells the reader to stop, and as many
 * warnings, after which they are only counted. `finish` says how many more there were.
 */
export class FindingList {
  private readonly found: Diagnostic[] = []
  private errorCount = 0
  private warningCount = 0
  private last: Diagnostic | null = null

  get isFull(): boolean {
    return this.errorCount >= MAX_DIAGNOSTICS
  }

  get hasErrors(): boolean {
    return this.errorCount > 0
  }

  error(
    code: DiagnosticCode,
    source: Source,
    start: number,
    end: number,
    message: string,
    extras: FindingExtras = {},
  ): void {
    if (this.isFull) return
    this.errorCount++
    this.add('error', code, source, start, end, message, extras)
  }

  warn(
    code: DiagnosticCode,
    source: Source,
    start: number,
    end: number,
    message: string,
    extras: FindingExtras = {},
  ): void {
    this.warningCount++
    if (this.warningCount <= MAX_DIAGNOSTICS) this.add('warning', code, source, start, end, message, extras)
  }

  /** All findings; call it once, at the end. */
  finish(): readonly Diagnostic[] {
    const place = this.last
    if (place === null) return this.found
    const more = (severity: 'error' | 'warning', message: string): void => {
      this.found.push({ code: 'too-many', severity, file: place.file, span: place.span, message })
    }
    if (this.isFull) more('error', `${MAX_DIAGNOSTICS} errors found; reading stopped here`)
    if (this.warningCount > MAX_DIAGNOSTICS) {
      more('warning', `${this.warningCount - MAX_DIAGNOSTICS} more warnings are not listed`)
    }
    return this.found
  }

  private add(
    severity: 'error' | 'warning',
    code: DiagnosticCode,
    source: Source,
    start: number,
    end: number,
    message: string,
    extras: FindingExtras,
  ): void {
    const diagnostic: Diagnostic = {
      code,
      severity,
      file: source.name,
      span: spanWithin(source, start, end),
      message,
      ...(extras.hint ? { hint: extras.hint } : {}),
      ...(extras.notes ? { notes: extras.notes } : {}),
    }
    this.found.push(diagnostic)
    this.last = diagnostic
  }
}

/** The span as far as the text goes. */
function spanWithin(source: Source, start: number, end: number): Span {
  const from = Math.max(0, Math.min(start, source.text.length))
  return { start: from, end: Math.max(from, Math.min(end, source.text.length)) }
}

/** A name as it stands in a message: quoted, and cut where it is long. */
export function quoted(name: string): string {
  return `"${name.length > 60 ? `${name.slice(0, 57)}...` : name}"`
}
