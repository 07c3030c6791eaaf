import type { Diagnostic } from './diagnostic.ts'
import { buildLineIndex, type LineIndex } from './line-index.ts'
import type { Source } from './source.ts'

/** A finding with its place worked out, ready for a screen, a terminal or a report. */
export type PlacedDiagnostic = {
  readonly code: string
  readonly severity: 'error' | 'warning' | 'note'
  readonly file: string
  readonly line: number
  readonly column: number
  readonly message: string
  readonly hint: string | null
  /** Second places that belong to the finding. */
  readonly notes: readonly {
    readonly file: string
    readonly line: number
    readonly column: number
    readonly message: string
  }[]
  /** The line before, the line, carets under the span; empty where the file has no text. */
  readonly frame: string
}

const FRAME_WIDTH = 100
const TAB = '    '

/**
 * Returns findings with line, column and caret frame. Each file's line index is built once; findings in files that are
 * not among the sources keep line 1, column 1.
 */
export function placeDiagnostics(
  diagnostics: readonly Diagnostic[],
  sources: readonly Source[],
): PlacedDiagnostic[] {
  const indexes = new Map<string, { text: string; index: LineIndex }>()
  const entryOf = (file: string): { text: string; index: LineIndex } => {
    let entry = indexes.get(file)
    if (!entry) {
      const text = sources.find((source) => source.name === file)?.text ?? ''
      entry = { text, index: buildLineIndex(text) }
      indexes.set(file, entry)
    }
    return entry
  }
  return diagnostics.map((diagnostic) => {
    const entry = entryOf(diagnostic.file)
    const { line, column } = entry.index.placeOf(diagnostic.span.start)
    return {
      code: diagnostic.code,
      severity: diagnostic.severity,
      file: diagnostic.file,
      line,
      column,
      message: diagnostic.message,
      hint: diagnostic.hint ?? null,
      notes: (diagnostic.notes ?? []).map((note) => ({
        file: note.file,
        ...entryOf(note.file).index.placeOf(note.span.start),
        message: note.message,
      })),
      frame: caretFrame(entry.text, entry.index, diagnostic),
    }
  })
}

/** One finding as the command line prints it: `file:line:column - error: message`, the frame, what to do. */
export function formatDiagnostic(placed: PlacedDiagnostic): string {
  const parts = [`${placed.file}:${placed.line}:${placed.column} - ${placed.severity}: ${placed.message}`]
  if (placed.frame) parts.push(placed.frame)
  for (const note of placed.notes) parts.push(`  ${note.file}:${note.line}:${note.column} - ${note.message}`)
  if (placed.hint) parts.push(`  ${placed.hint}`)
  return parts.join('\n')
}

/**
 * The line before, the line and carets under the span. Tabs count four columns, long lines are cut to a window around
 * the place, a span over several lines is marked on its first.
 */
function caretFrame(text: string, index: LineIndex, diagnostic: Diagnostic): string {
  if (text.length === 0) return ''
  const { line, column } = index.placeOf(diagnostic.span.start)
  const rows: string[] = []
  const gutter = String(line).length
  const width = Math.max(1, diagnostic.span.end - diagnostic.span.start)
  const from = Math.max(0, column - 1 - (FRAME_WIDTH >> 1))
  if (line > 1) rows.push(frameRow(line - 1, gutter, windowOf(lineText(text, index, line - 1), from)))
  const own = lineText(text, index, line)
  const shown = windowOf(own, from)
  rows.push(frameRow(line, gutter, shown))
  const before = windowOf(own.slice(0, column - 1), from)
  const marked = Math.max(1, Math.min(width, own.length - (column - 1), FRAME_WIDTH - (column - 1 - from)))
  rows.push(`${' '.repeat(gutter)} | ${' '.repeat(before.length)}${'^'.repeat(marked)}`)
  return rows.join('\n')
}

function frameRow(line: number, gutter: number, text: string): string {
  return `${String(line).padStart(gutter)} | ${text}`.trimEnd()
}

function windowOf(line: string, from: number): string {
  const cut = line.slice(from, from + FRAME_WIDTH)
  return (from > 0 ? '…' : '') + cut.replaceAll('\t', TAB).replace(/\p{Cc}/gu, '·')
}

function lineText(text: string, index: LineIndex, line: number): string {
  const start = index.lineStarts[line - 1]
  const end = line < index.lineStarts.length ? index.lineStarts[line] : text.length
  return text.slice(start, Math.min(end, start + 1_000_000)).replace(/[\r\n]+$/, '')
}
