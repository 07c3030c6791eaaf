import { AppError } from '../contract/errors.ts'
import type { TestPinView } from '../contract/shapes/netlist.ts'
import type { CellLibrary } from '../engine/circuit/cell-library.ts'
import type { Netlist } from '../engine/circuit/netlist.ts'
import { buildFaultList } from '../engine/faults/build-fault-list.ts'
import type { FaultList } from '../engine/faults/fault-list.ts'
import { readLiberty } from '../engine/formats/liberty/read-liberty.ts'
import { readNetlist } from '../engine/formats/registry.ts'
import type { Diagnostic, Reading } from '../engine/source/diagnostic.ts'
import type { ReadingProgress } from '../engine/source/reading-progress.ts'
import type { Source } from '../engine/source/source.ts'
import { readSourceBytes } from './read-source-file.ts'

export type NamedBytes = { readonly name: string; readonly bytes: Uint8Array }

/** A netlist as it can be read again at any time. */
export type NetlistInput = {
  readonly files: readonly NamedBytes[]
  readonly libraries: readonly NamedBytes[]
  readonly top: string | null
  readonly testPins: readonly TestPinView[]
  readonly assumeScanned: boolean
}

export type LoadedNetlist = { readonly netlist: Netlist; readonly faults: FaultList }

/** What reading gave, with the sources that its findings point into. */
export type NetlistReading = {
  readonly sources: readonly Source[]
  readonly libraries: readonly Source[]
  readonly reading: Reading<Netlist>
}

export async function readNetlistInput(
  input: NetlistInput,
  onProgress: ReadingProgress,
): Promise<NetlistReading> {
  const files = await readAll(input.files)
  const libraryFiles = await readAll(input.libraries)
  const diagnostics: Diagnostic[] = [...files.diagnostics, ...libraryFiles.diagnostics]
  const stopped = (): NetlistReading => ({
    sources: files.sources,
    libraries: libraryFiles.sources,
    reading: { value: null, diagnostics },
  })
  if (files.sources.length < input.files.length || libraryFiles.sources.length < input.libraries.length) {
    return stopped()
  }
  const reading = netlistOf(files.sources, libraryFiles.sources, input, onProgress)
  return {
    sources: files.sources,
    libraries: libraryFiles.sources,
    reading: { value: reading.value, diagnostics: [...diagnostics, ...reading.diagnostics] },
  }
}

/** Reads a netlist and its cell libraries from their texts. */
export function netlistOf(
  sources: readonly Source[],
  librarySources: readonly Source[],
  { top, testPins, assumeScanned }: Pick<NetlistInput, 'top' | 'testPins' | 'assumeScanned'>,
  onProgress: ReadingProgress,
): Reading<Netlist> {
  const diagnostics: Diagnostic[] = []
  const libraries: CellLibrary[] = []
  for (const source of librarySources) {
    const library = readLiberty(source, { onProgress })
    diagnostics.push(...library.diagnostics)
    if (library.value === null) return { value: null, diagnostics }
    libraries.push(library.value)
  }
  const { value, diagnostics: found } = readNetlist(sources, {
    libraries,
    testPins,
    assumeScanned,
    onProgress,
    ...(top === null ? {} : { top }),
  })
  return { value, diagnostics: [...diagnostics, ...found] }
}

/** Reads a netlist that was read before and its faults; the last few stay at hand under their key. */
export async function loadNetlist(key: string, input: NetlistInput): Promise<LoadedNetlist> {
  const held = recent.get(key)
  if (held !== undefined) return held
  const { reading } = await readNetlistInput(input, () => true)
  if (reading.value === null) {
    throw new AppError('damaged-project', 'The netlist that is kept in the project can no longer be read.')
  }
  const loaded = { netlist: reading.value, faults: buildFaultList(reading.value.circuit) }
  recent.set(key, loaded)
  for (const old of [...recent.keys()].slice(0, -RECENT_KEPT)) recent.delete(old)
  return loaded
}

const RECENT_KEPT = 2
const recent = new Map<string, LoadedNetlist>()

/** Returns bytes as sources; those that can't be text are missing and have a finding. */
export async function readAll(
  files: readonly NamedBytes[],
): Promise<{ readonly sources: Source[]; readonly diagnostics: Diagnostic[] }> {
  const sources: Source[] = []
  const diagnostics: Diagnostic[] = []
  for (const { name, bytes } of files) {
    const reading = await readSourceBytes(bytes, name)
    diagnostics.push(...reading.diagnostics)
    if (reading.value !== null) sources.push(reading.value)
  }
  return { sources, diagnostics }
}
