import type { Netlist } from '../../engine/circuit/netlist.ts'
import { readPatterns, type PatternReading } from '../../engine/formats/registry.ts'
import type { Source } from '../../engine/source/source.ts'
import { progressOf, valueOf, type FileWork } from './file-work.ts'
import { includedSource } from './included-source.ts'
import { refuseWrongType } from './wrong-file-type.ts'

/** Reads the texts of pattern files for a netlist, one after the other. Throws as valueOf does. */
export function readPatternSources(
  sources: readonly Source[],
  netlist: Netlist,
  work: FileWork,
): PatternReading {
  refuseWrongType(sources, 'patterns', work)
  const included: Source[] = []
  const include = (name: string): Source | null => {
    const source = sources[0] && includedSource(sources[0], name)
    if (source) included.push(source)
    return source ?? null
  }
  const onProgress = progressOf(work, 'Reading the patterns')
  const reading = readPatterns(sources, netlist, { include, onProgress })
  return valueOf(work, reading, [...sources, ...included])
}
