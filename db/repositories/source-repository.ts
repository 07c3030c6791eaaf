import type { Database } from 'better-sqlite3'

/** A file that a revision was read from. */
export type StoredSource = {
  readonly role: 'netlist' | 'library' | 'patterns'
  readonly name: string
  readonly sizeBytes: number
  /** Hexadecimal, of the file itself. */
  readonly sha256: string
  readonly gzip: Uint8Array
}

export type SourceOwner = { readonly netlistId: number } | { readonly patternSetId: number }

/** The facts of a stored file, without its bytes. */
export type SourceFacts = Omit<StoredSource, 'gzip'>

type FactsRow = { role: StoredSource['role']; name: string; size_bytes: number; sha256: string }

export type SourceRepository = ReturnType<typeof createSourceRepository>

/** The files behind netlist and pattern-set revisions, in the order in which they were added. */
export function createSourceRepository(db: Database) {
  const facts = 'role, name, size_bytes, sha256'
  const owner = '(netlist_id = @netlistId OR pattern_set_id = @patternSetId)'
  const insert = db.prepare(
    `INSERT INTO source (netlist_id, pattern_set_id, role, name, size_bytes, sha256, gzip)
     VALUES (@netlistId, @patternSetId, @role, @name, @sizeBytes, @sha256, @gzip)`,
  )
  const all = db.prepare<[object], FactsRow & { gzip: Buffer }>(
    `SELECT ${facts}, gzip FROM source WHERE ${owner} ORDER BY id`,
  )
  const allFacts = db.prepare<[object], FactsRow>(`SELECT ${facts} FROM source WHERE ${owner} ORDER BY id`)
  return {
    add(of: SourceOwner, source: StoredSource): void {
      insert.run({ ...keysOf(of), ...source })
    },
    list: (of: SourceOwner): StoredSource[] =>
      all.all(keysOf(of)).map((row) => ({ ...factsOf(row), gzip: new Uint8Array(row.gzip) })),
    facts: (of: SourceOwner): SourceFacts[] => allFacts.all(keysOf(of)).map(factsOf),
  }
}

function factsOf({ role, name, size_bytes, sha256 }: FactsRow): SourceFacts {
  return { role, name, sizeBytes: size_bytes, sha256 }
}

function keysOf(owner: SourceOwner): { netlistId: number | null; patternSetId: number | null } {
  return { netlistId: null, patternSetId: null, ...owner }
}
