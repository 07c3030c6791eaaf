import type { Database } from 'better-sqlite3'

export type PackedOwner = { readonly patternSetId: number } | { readonly runId: number }
export type PackedKind = 'patterns' | 'segment'

export type PackedRepository = ReturnType<typeof createPackedRepository>

/** Packed columns of numbers in parts of a few megabytes, so that no single read or write holds anything up. */
export function createPackedRepository(db: Database) {
  const owner = 'pattern_set_id IS @patternSetId AND run_id IS @runId AND kind = @kind'
  const insert = db.prepare(
    `INSERT INTO packed (pattern_set_id, run_id, kind, part, bytes)
     VALUES (@patternSetId, @runId, @kind, @part, @bytes)`,
  )
  const count = db.prepare<[object], number>(`SELECT COUNT(*) FROM packed WHERE ${owner}`).pluck()
  const one = db.prepare<[object], Buffer>(`SELECT bytes FROM packed WHERE ${owner} AND part = @part`).pluck()
  const removeFrom = db.prepare<[object]>(`DELETE FROM packed WHERE ${owner} AND part >= @part`)
  const key = (of: PackedOwner, kind: PackedKind): object => ({
    patternSetId: null,
    runId: null,
    ...of,
    kind,
  })
  return {
    add(of: PackedOwner, kind: PackedKind, part: number, bytes: Uint8Array): void {
      insert.run({ ...key(of, kind), part, bytes })
    },
    count: (of: PackedOwner, kind: PackedKind): number => count.get(key(of, kind)) ?? 0,
    /** A copy of the part's bytes in a buffer of their own; null where there is no such part. */
    part(of: PackedOwner, kind: PackedKind, part: number): Uint8Array<ArrayBuffer> | null {
      const bytes = one.get({ ...key(of, kind), part })
      return bytes === undefined ? null : new Uint8Array(bytes)
    },
    /** Removes this part and all after it. */
    removeFrom(of: PackedOwner, kind: PackedKind, part: number): void {
      removeFrom.run({ ...key(of, kind), part })
    },
  }
}
