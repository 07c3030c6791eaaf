import type { PackedOwner } from '../../db/repositories/packed-repository.ts'
import type { ProjectStore } from '../../db/open-project.ts'
import type { InputFile } from '../report/report-input.ts'
import type { NetlistInput } from '../workers/load-netlist.ts'
import { found } from './session.ts'

/** Parts of a run's segment are numbered from a multiple of this, so that segments can be told apart. */
export const PARTS_PER_SEGMENT = 4096

/** Returns a netlist revision as desks read it again, and the key under which they keep it at hand. */
export function storedNetlist(
  store: ProjectStore,
  netlistId: number,
): { netlistKey: string; netlist: NetlistInput } {
  const { account } = found(store.netlists.get(netlistId))
  const sources = store.sources.list({ netlistId })
  const ofRole = (role: string): NetlistInput['files'] =>
    sources.filter((source) => source.role === role).map(({ name, gzip }) => ({ name, bytes: gzip }))
  return {
    netlistKey: `${store.path} netlist ${netlistId}`,
    netlist: {
      files: ofRole('netlist'),
      libraries: ofRole('library'),
      top: account.format === 'verilog' ? account.top : null,
      testPins: account.testPins.filter(({ from }) => from !== 'library'),
      assumeScanned: account.assumeScanned,
    },
  }
}

/** Returns all parts of a pattern set. */
export function storedPatterns(store: ProjectStore, patternSetId: number): Uint8Array[] {
  const owner: PackedOwner = { patternSetId }
  return Array.from({ length: store.packed.count(owner, 'patterns') }, (_, part) =>
    found(store.packed.part(owner, 'patterns', part)),
  )
}

/** Returns what a run has detected so far: its segments in order, each in parts. Other work goes on between them. */
export async function storedSegments(store: ProjectStore, runId: number): Promise<Uint8Array[][]> {
  const segments: Uint8Array[][] = []
  const whole = store.runs.segments(runId)
  while (segments.length < whole) {
    const parts: Uint8Array[] = []
    for (;;) {
      const part = store.packed.part({ runId }, 'segment', segments.length * PARTS_PER_SEGMENT + parts.length)
      if (part === null) break
      parts.push(part)
      await new Promise(setImmediate)
    }
    segments.push(parts)
  }
  return segments
}

/** Returns the files behind a run, as reports list them. */
export function inputFiles(store: ProjectStore, netlistId: number, patternSetId: number): InputFile[] {
  return [...store.sources.facts({ netlistId }), ...store.sources.facts({ patternSetId })]
}
