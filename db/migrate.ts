import { existsSync } from 'node:fs'
import type { Database } from 'better-sqlite3'
import { AppError } from '../app/contract/errors.ts'

export type Migration = {
  readonly version: number
  readonly name: string
  up(db: Database): void
}

/**
 * Brings a database to the last migration's version, each step in a transaction together with its version. A file that
 * holds something is copied beside itself before the first step; returns the copy's path, null where none was needed.
 * Throws AppError 'damaged-project' where a step fails: the file then stands at the last step that went through.
 */
export function migrate(db: Database, migrations: readonly Migration[]): string | null {
  migrations.forEach(({ version }, at) => {
    if (version !== at + 1) throw new Error(`migration ${at + 1} has the version ${version}`)
  })
  const from = versionOf(db)
  const pending = migrations.slice(from)
  if (pending.length === 0) return null
  const copy = from === 0 ? null : copyBeside(db, from)
  for (const { version, name, up } of pending) {
    try {
      db.transaction(() => {
        up(db)
        db.pragma(`user_version = ${version}`)
      })()
    } catch (cause) {
      const kept = copy === null ? '' : ` A copy as it was before stands at ${copy}.`
      throw new AppError(
        'damaged-project',
        `The project could not be brought to this version of Tallycut: step ${version} (${name}) failed.${kept}`,
        undefined,
        cause,
      )
    }
  }
  return copy
}

export function versionOf(db: Database): number {
  return Number(db.pragma('user_version', { simple: true }))
}

function copyBeside(db: Database, version: number): string {
  const stem = `${db.name}.before-${version + 1}`
  let path = `${stem}.bak`
  for (let again = 2; existsSync(path); again++) path = `${stem}-${again}.bak`
  db.prepare('VACUUM INTO ?').run(path)
  return path
}
