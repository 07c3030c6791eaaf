import type { Netlist } from '../engine/circuit/netlist.ts'
import { exportWarnings, type ExportSelection } from '../engine/formats/export-selection.ts'
import { simulateGood } from '../engine/simulate/good-machine.ts'
import type { PatternSet } from '../engine/simulate/pattern-set.ts'

export const PATTERN_EXTENSIONS = { vec: 'vectors', txt: 'vectors', csv: 'csv', stil: 'stil' } as const

export type PatternFileFormat = (typeof PATTERN_EXTENSIONS)[keyof typeof PATTERN_EXTENSIONS]

/** Returns the text of a pattern file with these patterns, in parts, and what its user must know. */
export async function patternParts(
  netlist: Netlist,
  patterns: PatternSet,
  sequence: Uint32Array,
  format: PatternFileFormat,
  title: string,
): Promise<{ readonly parts: Iterable<string>; readonly warnings: readonly string[] }> {
  const { circuit } = netlist
  const response = patterns.expected === null ? simulateGood(circuit, patterns) : null
  const selection: ExportSelection = { patterns, circuit, sequence, response }
  const warnings = exportWarnings(selection)
  switch (format) {
    case 'stil': {
      const { stilParts } = await import('../engine/formats/stil/write-stil.ts')
      return { parts: stilParts(patterns, netlist, sequence, { title, response }), warnings }
    }
    case 'vectors': {
      const { vectorsParts } = await import('../engine/formats/vectors/write-vectors.ts')
      return { parts: vectorsParts(selection), warnings }
    }
    case 'csv': {
      const { patternCsvParts } = await import('../engine/formats/csv/write-pattern-csv.ts')
      return { parts: patternCsvParts(selection), warnings }
    }
  }
}
