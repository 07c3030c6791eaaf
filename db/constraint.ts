import Sqlite from 'better-sqlite3'
import { AppError } from '../app/contract/errors.ts'

/** Runs a write; throws AppError 'name-taken' where a unique index refuses it. */
export function unlessNameTaken<T>(name: string, write: () => T): T {
  return unlessTaken(`The name "${name}" is in use here. Choose another.`, write)
}

/** The same with words of one's own. */
export function unlessTaken<T>(message: string, write: () => T): T {
  try {
    return write()
  } catch (error) {
    if (error instanceof Sqlite.SqliteError && error.code === 'SQLITE_CONSTRAINT_UNIQUE') {
      throw new AppError('name-taken', message)
    }
    throw error
  }
}
