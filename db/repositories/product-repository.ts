import type { Database } from 'better-sqlite3'
import type { FieldValues, Limits, ProductRecord } from '../../app/contract/shapes/model.ts'
import type { Project } from '../../app/contract/shapes/project.ts'
import { unlessNameTaken } from '../constraint.ts'

type Row = {
  id: number
  name: string
  note: string
  values_json: string
  limits_json: string
  tester_id: number | null
  created_at_ms: number
}

export type ProductRepository = ReturnType<typeof createProductRepository>

const NO_LIMITS: Limits = { maxMilliseconds: null, minCoverage: null, maxDppm: null }

/** Products of a project, in the order in which they were made. */
export function createProductRepository(db: Database) {
  const one = db.prepare<[number], Row>(
    `SELECT product.id, product.name, product.note, product.values_json, limits_json, product.created_at_ms,
            tester.id AS tester_id
     FROM product LEFT JOIN tester ON tester.id = product.tester_id AND tester.deleted_token IS NULL
     WHERE product.id = ? AND product.deleted_token IS NULL`,
  )
  const summaries = db.prepare<[], { id: number; name: string; figures_json: string | null }>(
    `SELECT product.id, product.name, budget.figures_json
     FROM product LEFT JOIN budget ON budget.product_id = product.id AND in_use = 1 AND budget.deleted_token IS NULL
     WHERE product.deleted_token IS NULL ORDER BY product.id`,
  )
  const insert = db.prepare<[string, string, string, number]>(
    'INSERT INTO product (name, values_json, limits_json, created_at_ms) VALUES (?, ?, ?, ?)',
  )
  const update = db.prepare<[string, string, string, string, number | null, number]>(
    'UPDATE product SET name = ?, note = ?, values_json = ?, limits_json = ?, tester_id = ? WHERE id = ?',
  )
  return {
    /** Id, name and the coverage of the budget in use of each. */
    summaries: (): Project['products'] =>
      summaries.all().map(({ id, name, figures_json }) => ({
        id,
        name,
        coverage: figures_json === null ? null : (JSON.parse(figures_json) as { coverage: number }).coverage,
      })),
    get(id: number): ProductRecord | null {
      const row = one.get(id)
      return row === undefined ? null : productOf(row)
    },
    create(name: string, atMs: number): number {
      const { lastInsertRowid } = unlessNameTaken(name, () =>
        insert.run(name, '{}', JSON.stringify(NO_LIMITS), atMs),
      )
      return Number(lastInsertRowid)
    },
    update({ id, name, note, values, limits, testerId }: ProductRecord): void {
      unlessNameTaken(name, () =>
        update.run(name, note, JSON.stringify(values), JSON.stringify(limits), testerId, id),
      )
    },
  }
}

function productOf(row: Row): ProductRecord {
  return {
    id: row.id,
    name: row.name,
    note: row.note,
    createdAtMs: row.created_at_ms,
    values: JSON.parse(row.values_json) as FieldValues,
    limits: JSON.parse(row.limits_json) as Limits,
    testerId: row.tester_id,
  }
}
