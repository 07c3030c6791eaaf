import type { UnusableKind, UnusableSource } from '../../circuit/netlist.ts'

const MAX_EXAMPLES = 10

/** What has been collected of one kind, by nets of the graph. */
type Row = {
  kind: UnusableKind
  count: number
  examples: string[]
  sources: number[]
  unobserved: number[]
}

/** Collects what gives X, by kind. */
export class UnusableSources {
  private readonly rows = new Map<UnusableKind, Row>()

  /** Counts one more of a kind and returns the kind's row, for its nets. */
  add(kind: UnusableKind, name: string): Row {
    let row = this.rows.get(kind)
    if (row === undefined) {
      row = { kind, count: 0, examples: [], sources: [], unobserved: [] }
      this.rows.set(kind, row)
    }
    row.count++
    if (row.examples.length < MAX_EXAMPLES) row.examples.push(name)
    return row
  }

  count(kind: UnusableKind): number {
    return this.rows.get(kind)?.count ?? 0
  }

  /** The report's rows; `netOf` maps nets of the graph to the circuit's, −1 where the circuit has none. */
  finish(netOf: Int32Array): UnusableSource[] {
    const inCircuit = (nets: readonly number[]): Uint32Array => {
      const found = new Set<number>()
      for (const net of nets) if (netOf[net] >= 0) found.add(netOf[net])
      return Uint32Array.from(found)
    }
    return Array.from(this.rows.values(), (row) => ({
      kind: row.kind,
      count: row.count,
      examples: row.examples,
      sources: inCircuit(row.sources),
      unobserved: inCircuit(row.unobserved),
    }))
  }
}
