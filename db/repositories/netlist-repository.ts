import type { Database } from 'better-sqlite3'
import type { NetlistAccount, NetlistRevision } from '../../app/contract/shapes/netlist.ts'
import { unlessNameTaken } from '../constraint.ts'
import type { SourceRepository, StoredSource } from './source-repository.ts'

type Row = {
  id: number
  product_id: number
  name: string
  note: string
  sha256: string
  account_json: string
  warnings: number
  created_at_ms: number
}

export type NewNetlist = Omit<NetlistRevision, 'id' | 'files'> & { readonly sources: readonly StoredSource[] }

export type NetlistRepository = ReturnType<typeof createNetlistRepository>

/** Netlist revisions with the files that they were read from, newest first. */
export function createNetlistRepository(db: Database, sources: SourceRepository) {
  const columns = 'id, product_id, name, note, sha256, account_json, warnings, created_at_ms'
  const ofProduct = db.prepare<[number], Row>(
    `SELECT ${columns} FROM netlist WHERE product_id = ? AND deleted_token IS NULL ORDER BY id DESC`,
  )
  const one = db.prepare<[number], Row>(
    `SELECT ${columns} FROM netlist WHERE id = ? AND deleted_token IS NULL`,
  )
  const insert = db.prepare(
    `INSERT INTO netlist (product_id, name, note, sha256, account_json, warnings, created_at_ms)
     VALUES (@productId, @name, @note, @sha256, @account, @warnings, @createdAtMs)`,
  )
  const rename = db.prepare<[string, string, number]>('UPDATE netlist SET name = ?, note = ? WHERE id = ?')
  const revisionOf = (row: Row): NetlistRevision => ({
    id: row.id,
    productId: row.product_id,
    name: row.name,
    note: row.note,
    createdAtMs: row.created_at_ms,
    files: sources.facts({ netlistId: row.id }).map(({ name }) => name),
    sha256: row.sha256,
    account: JSON.parse(row.account_json) as NetlistAccount,
    warnings: row.warnings,
  })
  return {
    listOf: (productId: number): NetlistRevision[] => ofProduct.all(productId).map(revisionOf),
    get(id: number): NetlistRevision | null {
      const row = one.get(id)
      return row === undefined ? null : revisionOf(row)
    },
    create(netlist: NewNetlist): number {
      const { sources: files, account, ...rest } = netlist
      return db.transaction(() => {
        const { lastInsertRowid } = unlessNameTaken(netlist.name, () =>
          insert.run({ ...rest, account: JSON.stringify(account) }),
        )
        const netlistId = Number(lastInsertRowid)
        for (const file of files) sources.add({ netlistId }, file)
        return netlistId
      })()
    },
    rename(id: number, name: string, note: string): void {
      unlessNameTaken(name, () => rename.run(name, note, id))
    },
  }
}
