import type { Database } from 'better-sqlite3'
import type { Run, RunState } from '../../app/contract/shapes/run.ts'

type Row = {
  id: number
  product_id: number
  number: number
  netlist_id: number
  pattern_set_id: number
  state: RunState
  detection_limit: number
  created_at_ms: number
  ended_at_ms: number | null
  patterns_done: number
  patterns_total: number
  seconds: number
  figures_json: string | null
  reason: string | null
  engine: string
}

export type NewRun = Pick<
  Run,
  'productId' | 'netlistId' | 'patternSetId' | 'detectionLimit' | 'patternsTotal' | 'createdAtMs' | 'engine'
>

/** What changes while a run goes on. */
export type RunStanding = Pick<Run, 'state' | 'patternsDone' | 'seconds' | 'figures' | 'reason' | 'endedAtMs'>

export type RunRepository = ReturnType<typeof createRunRepository>

/** Coverage runs, newest first, numbered from 1 in each product. */
export function createRunRepository(db: Database) {
  const columns = `id, product_id, number, netlist_id, pattern_set_id, state, detection_limit, created_at_ms, ended_at_ms,
    patterns_done, patterns_total, seconds, figures_json, reason, engine`
  const ofProduct = db.prepare<[number], Row>(
    `SELECT ${columns} FROM run WHERE product_id = ? AND deleted_token IS NULL ORDER BY number DESC`,
  )
  const one = db.prepare<[number], Row>(`SELECT ${columns} FROM run WHERE id = ? AND deleted_token IS NULL`)
  const inState = db.prepare<[string], Row>(
    `SELECT ${columns} FROM run WHERE state = ? AND deleted_token IS NULL ORDER BY id`,
  )
  const insert = db.prepare(
    `INSERT INTO run (product_id, number, netlist_id, pattern_set_id, state, detection_limit, patterns_total, engine,
       created_at_ms)
     VALUES (@productId, (SELECT COALESCE(MAX(number), 0) + 1 FROM run WHERE product_id = @productId),
       @netlistId, @patternSetId, 'queued', @detectionLimit, @patternsTotal, @engine, @createdAtMs)`,
  )
  const update = db.prepare(
    `UPDATE run SET state = @state, patterns_done = @patternsDone, seconds = @seconds, figures_json = @figures,
       reason = @reason, ended_at_ms = @endedAtMs
     WHERE id = @id`,
  )
  const segments = db.prepare<[number], number>('SELECT segments FROM run WHERE id = ?').pluck()
  const setSegments = db.prepare<[number, number]>('UPDATE run SET segments = ? WHERE id = ?')
  const interrupt = db.prepare(
    "UPDATE run SET state = 'interrupted', reason = ? WHERE state IN ('queued', 'running')",
  )
  const count = db.prepare<[], number>('SELECT COUNT(*) FROM run WHERE deleted_token IS NULL').pluck()
  return {
    listOf: (productId: number): Run[] => ofProduct.all(productId).map(runOf),
    get(id: number): Run | null {
      const row = one.get(id)
      return row === undefined ? null : runOf(row)
    },
    inState: (state: RunState): Run[] => inState.all(state).map(runOf),
    count: (): number => count.get() ?? 0,
    create: (run: NewRun): number => Number(insert.run(run).lastInsertRowid),
    stand(id: number, standing: RunStanding): void {
      const { figures } = standing
      update.run({ ...standing, figures: figures === null ? null : JSON.stringify(figures), id })
    },
    /** How many segments of its patterns are whole in the file. */
    segments: (id: number): number => segments.get(id) ?? 0,
    setSegments(id: number, count: number): void {
      setSegments.run(count, id)
    },
    /** Marks what a program that ended left queued or running; returns how many there were. */
    interruptAll: (reason: string): number => interrupt.run(reason).changes,
  }
}

function runOf(row: Row): Run {
  return {
    id: row.id,
    productId: row.product_id,
    number: row.number,
    netlistId: row.netlist_id,
    patternSetId: row.pattern_set_id,
    state: row.state,
    detectionLimit: row.detection_limit,
    createdAtMs: row.created_at_ms,
    endedAtMs: row.ended_at_ms,
    patternsDone: row.patterns_done,
    patternsTotal: row.patterns_total,
    progress: row.state === 'done' ? 1 : row.patterns_done / Math.max(1, row.patterns_total),
    seconds: row.seconds,
    figures: row.figures_json === null ? null : (JSON.parse(row.figures_json) as Run['figures']),
    reason: row.reason,
    engine: row.engine,
  }
}
