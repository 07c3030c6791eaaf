import type { Database } from 'better-sqlite3'
import { unlessTaken } from '../constraint.ts'

/** Tables whose rows can be deleted and brought back, owners before what they own. */
const TABLES = ['tester', 'product', 'netlist', 'pattern_set', 'run', 'budget'] as const

export type Deletable = (typeof TABLES)[number]

/** What goes with a row: the tables that refer to it, and by which column. */
const OWNED: Readonly<Record<Deletable, readonly (readonly [Deletable, string])[]>> = {
  tester: [],
  product: [
    ['netlist', 'product_id'],
    ['pattern_set', 'product_id'],
    ['run', 'product_id'],
    ['budget', 'product_id'],
  ],
  netlist: [
    ['pattern_set', 'netlist_id'],
    ['run', 'netlist_id'],
  ],
  pattern_set: [['run', 'pattern_set_id']],
  run: [],
  budget: [],
}

export type TrashRepository = ReturnType<typeof createTrashRepository>

/** Deletion that can be taken back: rows are marked, and removed for good when the project closes. */
export function createTrashRepository(db: Database) {
  const remove = (table: Deletable, column: string, id: number, token: string): void => {
    const rows = db
      .prepare<[string, number], { id: number }>(
        `UPDATE ${table} SET deleted_token = ? WHERE ${column} = ? AND deleted_token IS NULL RETURNING id`,
      )
      .all(token, id)
    for (const row of rows) {
      for (const [owned, by] of OWNED[table]) remove(owned, by, row.id, token)
    }
  }
  return {
    /** Marks a row and all that goes with it. */
    remove(table: Deletable, id: number, token: string): void {
      db.transaction(() => remove(table, 'id', id, token))()
    },
    /** Brings back what one deletion took away; false where nothing bears the token. Throws AppError 'name-taken'. */
    restore(token: string): boolean {
      const back = (): number =>
        TABLES.reduce(
          (restored, table) =>
            restored +
            db
              .prepare<[string]>(`UPDATE ${table} SET deleted_token = NULL WHERE deleted_token = ?`)
              .run(token).changes,
          0,
        )
      const taken = 'Its name has been given to something else since. Rename that first.'
      return unlessTaken(taken, () => db.transaction(back)()) > 0
    },
    /** Removes for good whatever is marked. */
    empty(): void {
      db.transaction(() => {
        for (const table of TABLES.toReversed()) {
          db.exec(`DELETE FROM ${table} WHERE deleted_token IS NOT NULL`)
        }
      })()
    },
  }
}
