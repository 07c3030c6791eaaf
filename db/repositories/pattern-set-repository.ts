import type { Database } from 'better-sqlite3'
import type { PatternAccount, PatternSetRevision } from '../../app/contract/shapes/pattern-set.ts'
import { unlessNameTaken } from '../constraint.ts'
import type { PackedRepository } from './packed-repository.ts'
import type { SourceRepository, StoredSource } from './source-repository.ts'

type Row = {
  id: number
  product_id: number
  netlist_id: number
  name: string
  note: string
  sha256: string
  account_json: string
  warnings: number
  created_at_ms: number
}

export type NewPatternSet = Omit<PatternSetRevision, 'id' | 'files'> & {
  readonly sources: readonly StoredSource[]
  /** The patterns themselves, packed. */
  readonly packed: readonly Uint8Array[]
}

export type PatternSetRepository = ReturnType<typeof createPatternSetRepository>

/** Pattern-set revisions with their files and their packed patterns, newest first. */
export function createPatternSetRepository(
  db: Database,
  sources: SourceRepository,
  packed: PackedRepository,
) {
  const columns = 'id, product_id, netlist_id, name, note, sha256, account_json, warnings, created_at_ms'
  const ofProduct = db.prepare<[number], Row>(
    `SELECT ${columns} FROM pattern_set WHERE product_id = ? AND deleted_token IS NULL ORDER BY id DESC`,
  )
  const one = db.prepare<[number], Row>(
    `SELECT ${columns} FROM pattern_set WHERE id = ? AND deleted_token IS NULL`,
  )
  const insert = db.prepare(
    `INSERT INTO pattern_set (product_id, netlist_id, name, note, sha256, account_json, warnings, created_at_ms)
     VALUES (@productId, @netlistId, @name, @note, @sha256, @account, @warnings, @createdAtMs)`,
  )
  const rename = db.prepare<[string, string, number]>(
    'UPDATE pattern_set SET name = ?, note = ? WHERE id = ?',
  )
  const revisionOf = (row: Row): PatternSetRevision => ({
    id: row.id,
    productId: row.product_id,
    netlistId: row.netlist_id,
    name: row.name,
    note: row.note,
    createdAtMs: row.created_at_ms,
    files: sources.facts({ patternSetId: row.id }).map(({ name }) => name),
    sha256: row.sha256,
    account: JSON.parse(row.account_json) as PatternAccount,
    warnings: row.warnings,
  })
  return {
    listOf: (productId: number): PatternSetRevision[] => ofProduct.all(productId).map(revisionOf),
    get(id: number): PatternSetRevision | null {
      const row = one.get(id)
      return row === undefined ? null : revisionOf(row)
    },
    create(patternSet: NewPatternSet): number {
      const { sources: files, packed: parts, account, ...rest } = patternSet
      return db.transaction(() => {
        const { lastInsertRowid } = unlessNameTaken(patternSet.name, () =>
          insert.run({ ...rest, account: JSON.stringify(account) }),
        )
        const patternSetId = Number(lastInsertRowid)
        for (const file of files) sources.add({ patternSetId }, file)
        parts.forEach((bytes, part) => packed.add({ patternSetId }, 'patterns', part, bytes))
        return patternSetId
      })()
    },
    rename(id: number, name: string, note: string): void {
      unlessNameTaken(name, () => rename.run(name, note, id))
    },
  }
}
