import type { Database } from 'better-sqlite3'
import type { Assumptions, Budget } from '../../app/contract/shapes/budget.ts'
import { unlessNameTaken } from '../constraint.ts'

type Row = {
  id: number
  product_id: number
  run_id: number
  name: string
  note: string
  in_use: number
  order_name: Budget['order']
  cut: number
  assumptions_json: string
  figures_json: string
  created_at_ms: number
  stale: number
}

export type NewBudget = Omit<Budget, 'id' | 'stale' | 'inUse'> & { readonly runEndedAtMs: number }

export type BudgetRepository = ReturnType<typeof createBudgetRepository>

/** Budgets that were kept, newest first. At most one of a product is in use. */
export function createBudgetRepository(db: Database) {
  const select = `SELECT budget.id, budget.product_id, run_id, budget.name, budget.note, in_use, order_name, cut, assumptions_json,
      budget.figures_json, budget.created_at_ms,
      NOT EXISTS (SELECT 1 FROM run WHERE run.id = budget.run_id AND run.deleted_token IS NULL
                  AND run.ended_at_ms = budget.run_ended_at_ms) AS stale
    FROM budget WHERE deleted_token IS NULL`
  const ofProduct = db.prepare<[number], Row>(`${select} AND product_id = ? ORDER BY id DESC`)
  const one = db.prepare<[number], Row>(`${select} AND id = ?`)
  const insert = db.prepare(
    `INSERT INTO budget (product_id, run_id, run_ended_at_ms, name, note, order_name, cut, assumptions_json, figures_json,
       created_at_ms)
     VALUES (@productId, @runId, @runEndedAtMs, @name, @note, @order, @cut, @assumptions, @figures, @createdAtMs)`,
  )
  const rename = db.prepare<[string, string, number]>('UPDATE budget SET name = ?, note = ? WHERE id = ?')
  const noneInUse = db.prepare<[number]>(
    'UPDATE budget SET in_use = 0 WHERE product_id = (SELECT product_id FROM budget WHERE id = ?) AND in_use = 1',
  )
  const setInUse = db.prepare<[number]>('UPDATE budget SET in_use = 1 WHERE id = ?')
  return {
    listOf: (productId: number): Budget[] => ofProduct.all(productId).map(budgetOf),
    get(id: number): Budget | null {
      const row = one.get(id)
      return row === undefined ? null : budgetOf(row)
    },
    create(budget: NewBudget): number {
      const { assumptions, figures } = budget
      const { lastInsertRowid } = unlessNameTaken(budget.name, () =>
        insert.run({
          ...budget,
          assumptions: JSON.stringify(assumptions),
          figures: JSON.stringify(figures),
        }),
      )
      return Number(lastInsertRowid)
    },
    rename(id: number, name: string, note: string): void {
      unlessNameTaken(name, () => rename.run(name, note, id))
    },
    use(id: number, inUse: boolean): void {
      db.transaction(() => {
        noneInUse.run(id)
        if (inUse) setInUse.run(id)
      })()
    },
  }
}

function budgetOf(row: Row): Budget {
  return {
    id: row.id,
    productId: row.product_id,
    runId: row.run_id,
    name: row.name,
    note: row.note,
    createdAtMs: row.created_at_ms,
    inUse: row.in_use === 1,
    order: row.order_name,
    cut: row.cut,
    assumptions: JSON.parse(row.assumptions_json) as Assumptions,
    figures: JSON.parse(row.figures_json) as Budget['figures'],
    stale: row.stale === 1,
  }
}
