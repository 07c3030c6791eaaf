import { faultName, type FaultList } from '../faults/fault-list.ts'
import { closestName } from '../source/closest-name.ts'
import type { Diagnostic } from '../source/diagnostic.ts'
import type { Span } from '../source/source.ts'
import { blockOf } from './lost-faults.ts'

/** What the user says that a fault, or every fault of a block, is worth. */
export type WeightRow = {
  /** A fault such as `G7>G10.1/0`, a block such as `core/alu`, or in flat netlists whatever names begin with. */
  readonly name: string
  readonly weight: number
  /** Where the row stands in its file. */
  readonly span: Span
}

export type FaultWeights = {
  /** Length nFaults: the weight of each fault; 1 where no row speaks of it. */
  readonly ofFault: Float64Array
  /** Length nClasses: the sum over each class. */
  readonly ofClass: Float64Array
  /** Over all faults: what weighted coverage is divided by. */
  readonly total: number
  /** Rows that name nothing in the netlist, as warnings of code 'unknown-name'. */
  readonly diagnostics: readonly Diagnostic[]
}

/**
 * Returns what each fault is worth. A row that names a fault wins over rows that name blocks, a longer block over a
 * shorter. A block `B` holds what stands under `B/`; where nothing does, all faults whose names begin with `B`.
 */
export function weighFaults(faults: FaultList, rows: readonly WeightRow[], file: string): FaultWeights {
  const { nFaults, nClasses, classOf } = faults
  const names = Array.from({ length: nFaults }, (_, fault) => faultName(faults, fault))
  const byName = new Map(rows.map((row) => [row.name, row]))
  const unused = new Set(rows)
  const ofFault = new Float64Array(nFaults).fill(1)
  const isOwn = new Uint8Array(nFaults)
  for (let fault = 0; fault < nFaults; fault++) {
    const row = byName.get(names[fault]) ?? rowOfBlock(byName, names[fault])
    if (row === undefined) continue
    unused.delete(row)
    ofFault[fault] = row.weight
    isOwn[fault] = 1
  }

  const prefixes = [...unused].sort((a, b) => b.name.length - a.name.length)
  for (const row of prefixes) {
    for (let fault = 0; fault < nFaults; fault++) {
      if (!names[fault].startsWith(row.name)) continue
      unused.delete(row)
      if (isOwn[fault] === 1) continue
      ofFault[fault] = row.weight
      isOwn[fault] = 1
    }
  }

  const ofClass = new Float64Array(nClasses)
  let total = 0
  for (let fault = 0; fault < nFaults; fault++) {
    ofClass[classOf[fault]] += ofFault[fault]
    total += ofFault[fault]
  }
  const known = unused.size === 0 ? [] : [...new Set([...names, ...names.map(blockOf)])]
  const diagnostics = [...unused].map(({ name, span }): Diagnostic => {
    const meant = closestName(name, known)
    const hint =
      meant === null
        ? 'Weights name faults such as G7/0, or blocks such as core/alu'
        : `Did you mean "${meant}"?`
    const message = `nothing in the netlist is called, or begins with, "${name}"`
    return { code: 'unknown-name', severity: 'warning', file, span, message, hint }
  })
  return { ofFault, ofClass, total, diagnostics }
}

/** Returns the row of the innermost block around a fault that has one. */
function rowOfBlock(byName: ReadonlyMap<string, WeightRow>, fault: string): WeightRow | undefined {
  let block = blockOf(fault)
  while (block !== '') {
    const row = byName.get(block) ?? byName.get(`${block}/`)
    if (row !== undefined) return row
    block = block.slice(0, Math.max(0, block.lastIndexOf('/')))
  }
  return undefined
}
