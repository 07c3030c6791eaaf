import { NETLIST_FORMATS, PATTERN_FORMATS } from '../../engine/formats/registry.ts'
import type { Diagnostic } from '../../engine/source/diagnostic.ts'
import type { Source } from '../../engine/source/source.ts'
import { valueOf, type FileWork } from './file-work.ts'

const HEAD = 8192

/** Throws AppError 'bad-file', with a finding told, where a text can only be of the other kind. */
export function refuseWrongType(
  sources: readonly Source[],
  wanted: 'netlist' | 'patterns',
  work: FileWork,
): void {
  const found = sources.map((source) => wrongFileType(source, wanted)).filter((finding) => finding !== null)
  if (found.length > 0) valueOf(work, { value: null, diagnostics: found }, sources)
}

/** Returns a finding where a text that is to be a netlist, or patterns, can only be the other; null where it may be right. */
function wrongFileType(source: Source, wanted: 'netlist' | 'patterns'): Diagnostic | null {
  const [own, others] =
    wanted === 'netlist' ? [NETLIST_FORMATS, PATTERN_FORMATS] : [PATTERN_FORMATS, NETLIST_FORMATS]
  const head = source.text.slice(0, HEAD)
  const other = others.find((format) => format.looksLike(head))
  if (other === undefined || own.some((format) => format.looksLike(head))) return null
  const lineEnd = head.search(/[\r\n]/)
  return {
    code: 'wrong-file-type',
    severity: 'error',
    file: source.name,
    span: { start: 0, end: lineEnd < 0 ? head.length : lineEnd },
    message: `this looks like ${wanted === 'netlist' ? 'patterns' : 'a netlist'} (${other.label}), not like ${wanted === 'netlist' ? 'a netlist' : 'patterns'}`,
    hint: 'The netlist comes first, then the pattern files.',
  }
}
