import type { Netlist, TestPin } from '../../engine/circuit/netlist.ts'
import { buildFaultList } from '../../engine/faults/build-fault-list.ts'
import type { FaultList } from '../../engine/faults/fault-list.ts'
import { netlistFormatOf, patternFormatOf } from '../../engine/formats/registry.ts'
import { proposeTestPins } from '../../engine/formats/stil/read-stil.ts'
import { declaredInputs } from '../../engine/formats/verilog/declared-inputs.ts'
import type { Source } from '../../engine/source/source.ts'
import { netlistOf } from '../../workers/load-netlist.ts'
import { progressOf, valueOf, type FileWork } from './file-work.ts'
import { includedSource } from './included-source.ts'
import { readSources } from './read-sources.ts'
import { refuseWrongType } from './wrong-file-type.ts'

/** A netlist as its files and the user describe it. */
export type NetlistFiles = {
  readonly netlist: readonly string[]
  readonly libraries: readonly string[]
  readonly top: string | null
  /** Pins that hold a value in test, where the user says so; they go before what patterns and library propose. */
  readonly testPins: readonly TestPin[]
  readonly assumeScanned: boolean
}

export type NetlistOfFiles = { readonly netlist: Netlist; readonly faults: FaultList }

/**
 * Reads a netlist. Test pins that the user does not name are those that the STIL files among the patterns show.
 * Throws as valueOf does.
 */
export async function readNetlistFiles(
  files: NetlistFiles,
  patterns: readonly Source[],
  work: FileWork,
): Promise<NetlistOfFiles> {
  const sources = await readSources(files.netlist, work)
  refuseWrongType(sources, 'netlist', work)
  const libraries = await readSources(files.libraries, work)
  const { top, assumeScanned } = files
  const testPins = [...files.testPins, ...pinsOfPatterns(sources, patterns, files.testPins)]
  const onProgress = progressOf(work, 'Reading the netlist')
  const reading = netlistOf(sources, libraries, { top, testPins, assumeScanned }, onProgress)
  const netlist = valueOf(work, reading, [...sources, ...libraries])
  work.report({ phase: 'Listing faults', share: null })
  return { netlist, faults: buildFaultList(netlist.circuit) }
}

function pinsOfPatterns(
  netlist: readonly Source[],
  patterns: readonly Source[],
  named: readonly TestPin[],
): TestPin[] {
  const stil = patterns.find((source) => patternFormatOf(source).name === 'stil')
  const [first] = netlist
  if (stil === undefined || first === undefined || netlistFormatOf(first).name !== 'verilog') return []
  const ports = declaredInputs(netlist)
  for (const { name } of named) ports.delete(name)
  return proposeTestPins(stil, ports, { include: (name) => includedSource(stil, name) })
}
