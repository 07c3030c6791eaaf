import type { DiagnosticView } from '../contract/shapes/diagnostic.ts'
import { placeDiagnostics } from '../engine/source/caret-frame.ts'
import type { Diagnostic } from '../engine/source/diagnostic.ts'
import type { Source } from '../engine/source/source.ts'

/** Returns findings with their places and caret frames, as screens show them. */
export function diagnosticViews(
  diagnostics: readonly Diagnostic[],
  sources: readonly Source[],
): DiagnosticView[] {
  return placeDiagnostics(diagnostics, sources).map((placed) => ({ ...placed, notes: [...placed.notes] }))
}
