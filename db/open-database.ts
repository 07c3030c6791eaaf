import { closeSync, openSync, readSync, statSync } from 'node:fs'
import Sqlite, { type Database } from 'better-sqlite3'
import { AppError } from '../app/contract/errors.ts'
import { migrate, versionOf } from './migrate.ts'
import { migrations } from './migrations/index.ts'

/** "TlyC": says in the file's header that it is a Tallycut project. */
export const APPLICATION_ID = 0x546c7943

const HEADER = 'SQLite format 3\0'
/** Checking every page of larger files would hold up their opening; their pages are checked as they are read. */
const LARGEST_FULL_CHECK = 256 * 1024 * 1024

export type OpenedDatabase = {
  readonly db: Database
  readonly readOnly: boolean
  /** What the user should know of the opening; null where there is nothing to say. */
  readonly notice: string | null
}

/** Creates a project's database; throws AppError 'name-taken' where the file exists. */
export function createDatabase(path: string): OpenedDatabase {
  try {
    closeSync(openSync(path, 'wx'))
  } catch (cause) {
    if ((cause as NodeJS.ErrnoException).code === 'EEXIST') {
      throw new AppError('name-taken', `There is a file at ${path} already. Choose another name.`)
    }
    throw cause
  }
  const db = connect(path)
  db.pragma(`application_id = ${APPLICATION_ID}`)
  migrate(db, migrations)
  return { db, readOnly: false, notice: null }
}

/**
 * Opens a project's database and brings it to the present version. One from a newer version, and one that may not be
 * written, opens read-only. Nothing is written before the file has been found sound.
 * Throws AppError 'not-found', 'not-a-project', 'damaged-project' or 'in-use'.
 */
export function openDatabase(path: string): OpenedDatabase {
  checkHeader(path)
  const latest = migrations.length
  const version = probe(path)
  if (version > latest) {
    const db = connectReadOnly(path)
    const notice = 'A newer version of Tallycut wrote this project. It is open for reading only.'
    return { db, readOnly: true, notice }
  }
  let db: Database
  try {
    db = connect(path)
  } catch (error) {
    if (!['SQLITE_READONLY', 'SQLITE_CANTOPEN'].includes(sqliteCode(error))) throw error
    if (version < latest) throw new AppError('read-only', cannotMigrate(path))
    return { db: connectReadOnly(path), readOnly: true, notice: 'This file may only be read.' }
  }
  try {
    const copy = migrate(db, migrations)
    const notice =
      copy === null ? null : `The project was brought to this version; a copy of how it was is at ${copy}.`
    return { db, readOnly: false, notice }
  } catch (error) {
    db.close()
    throw error
  }
}

/**
 * Opens a project's database to be read and left as it is. Throws AppError 'not-found', 'not-a-project', 'damaged-project',
 * 'in-use', or 'read-only' where it would have to be brought to this version first.
 */
export function openForReading(path: string): OpenedDatabase {
  checkHeader(path)
  if (probe(path) < migrations.length) throw new AppError('read-only', cannotMigrate(path))
  return { db: connectReadOnly(path), readOnly: true, notice: null }
}

/** Writes what is left of the log into the file and closes it. */
export function closeDatabase({ db, readOnly }: OpenedDatabase): void {
  if (!readOnly) {
    db.pragma('optimize')
    db.pragma('wal_checkpoint(TRUNCATE)')
  }
  db.close()
}

function checkHeader(path: string): void {
  const stat = statSync(path, { throwIfNoEntry: false })
  if (stat === undefined) throw new AppError('not-found', `There is no file at ${path}.`)
  if (!stat.isFile()) throw new AppError('not-a-project', `${path} is no file, so no Tallycut project.`)
  const start = Buffer.alloc(HEADER.length)
  const file = openSync(path, 'r')
  try {
    readSync(file, start, 0, start.length, 0)
  } finally {
    closeSync(file)
  }
  if (start.toString('latin1') !== HEADER) {
    const why = stat.size === 0 ? 'is empty' : 'has the form of no project'
    throw new AppError('not-a-project', `${path} ${why}. A Tallycut project ends in .tallycut.`)
  }
}

/** Looks at the file without writing to it; returns its version. */
function probe(path: string): number {
  const damaged = (cause: unknown): AppError =>
    new AppError(
      'damaged-project',
      `The project at ${path} is damaged (${cause instanceof Error ? cause.message : String(cause)}). It was left as it is.`,
      undefined,
      cause,
    )
  let db: Database | null = null
  try {
    db = new Sqlite(path, { readonly: true, fileMustExist: true, timeout: 500 })
    if (db.pragma('application_id', { simple: true }) !== APPLICATION_ID) {
      throw new AppError('not-a-project', `${path} is a database of some other program.`)
    }
    if (statSync(path).size <= LARGEST_FULL_CHECK) {
      const found = db.pragma('quick_check(1)', { simple: true })
      if (found !== 'ok') throw damaged(found)
    }
    return versionOf(db)
  } catch (error) {
    if (error instanceof AppError) throw error
    if (sqliteCode(error).startsWith('SQLITE_BUSY')) {
      throw new AppError('in-use', 'The project is open in another Tallycut. Close it there first.')
    }
    throw damaged(error)
  } finally {
    db?.close()
  }
}

function connect(path: string): Database {
  const db = new Sqlite(path, { timeout: 500 })
  try {
    // One program at a time: a run that is under way must not look interrupted to a second one.
    db.pragma('locking_mode = EXCLUSIVE')
    db.pragma('journal_mode = WAL')
    // With a write-ahead log NORMAL keeps the file sound through any crash; a power cut may cost the last moments.
    db.pragma('synchronous = NORMAL')
    db.pragma('foreign_keys = ON')
    db.pragma('trusted_schema = OFF')
    return db
  } catch (error) {
    db.close()
    if (sqliteCode(error).startsWith('SQLITE_BUSY')) {
      throw new AppError('in-use', 'The project is open in another Tallycut. Close it there first.')
    }
    throw error
  }
}

function connectReadOnly(path: string): Database {
  const db = new Sqlite(path, { readonly: true, fileMustExist: true, timeout: 500 })
  db.pragma('trusted_schema = OFF')
  return db
}

function sqliteCode(error: unknown): string {
  return error instanceof Sqlite.SqliteError ? error.code : ''
}

function cannotMigrate(path: string): string {
  return `The project at ${path} is of an older version and may not be written. Copy it to where it may be, and open that.`
}
