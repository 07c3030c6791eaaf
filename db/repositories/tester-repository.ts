import type { Database } from 'better-sqlite3'
import type { FieldValues, TesterRecord } from '../../app/contract/shapes/model.ts'
import { unlessNameTaken } from '../constraint.ts'

type Row = { id: number; name: string; note: string; values_json: string }

export type TesterRepository = ReturnType<typeof createTesterRepository>

/** Testers of a project, in the order of their names. */
export function createTesterRepository(db: Database) {
  const columns = 'id, name, note, values_json'
  const all = db.prepare<[], Row>(
    `SELECT ${columns} FROM tester WHERE deleted_token IS NULL ORDER BY name COLLATE NOCASE, id`,
  )
  const one = db.prepare<[number], Row>(
    `SELECT ${columns} FROM tester WHERE id = ? AND deleted_token IS NULL`,
  )
  const insert = db.prepare<[string, string, number]>(
    'INSERT INTO tester (name, values_json, created_at_ms) VALUES (?, ?, ?)',
  )
  const update = db.prepare<[string, string, string, number]>(
    'UPDATE tester SET name = ?, note = ?, values_json = ? WHERE id = ?',
  )
  return {
    list: (): TesterRecord[] => all.all().map(testerOf),
    get: (id: number): TesterRecord | null => testerOrNull(one.get(id)),
    create(name: string, values: FieldValues, atMs: number): number {
      const { lastInsertRowid } = unlessNameTaken(name, () => insert.run(name, JSON.stringify(values), atMs))
      return Number(lastInsertRowid)
    },
    update({ id, name, note, values }: TesterRecord): void {
      unlessNameTaken(name, () => update.run(name, note, JSON.stringify(values), id))
    },
  }
}

function testerOrNull(row: Row | undefined): TesterRecord | null {
  return row === undefined ? null : testerOf(row)
}

function testerOf({ id, name, note, values_json }: Row): TesterRecord {
  return { id, name, note, values: JSON.parse(values_json) as FieldValues }
}
