import {
  closeDatabase,
  createDatabase,
  openDatabase,
  openForReading,
  type OpenedDatabase,
} from './open-database.ts'
import { createBudgetRepository } from './repositories/budget-repository.ts'
import { createNetlistRepository } from './repositories/netlist-repository.ts'
import { createPackedRepository } from './repositories/packed-repository.ts'
import { createPatternSetRepository } from './repositories/pattern-set-repository.ts'
import { createProductRepository } from './repositories/product-repository.ts'
import { createRunRepository } from './repositories/run-repository.ts'
import { createSourceRepository } from './repositories/source-repository.ts'
import { createTesterRepository } from './repositories/tester-repository.ts'
import { createTrashRepository } from './repositories/trash-repository.ts'

/** An open project file: its nouns, each with what can be asked of it. */
export type ProjectStore = ReturnType<typeof storeOf>

const INTERRUPTED = 'Tallycut ended while this run was under way. It can be resumed where it stood.'

/** Creates a project file; throws AppError 'name-taken' where there is one at that path. */
export function createProject(path: string, name: string, atMs: number): ProjectStore {
  const opened = createDatabase(path)
  opened.db.prepare('INSERT INTO project (id, name, created_at_ms) VALUES (1, ?, ?)').run(name, atMs)
  return storeOf(path, opened)
}

/**
 * Opens a project file. Runs that a program left under way, however it ended, are marked as interrupted.
 * Throws AppError 'not-found', 'not-a-project', 'damaged-project' or 'in-use'.
 */
export function openProject(path: string): ProjectStore {
  const opened = openDatabase(path)
  const store = storeOf(path, opened)
  if (!opened.readOnly) {
    store.runs.interruptAll(INTERRUPTED)
    store.trash.empty()
  }
  return store
}

/** Opens a project file to be read and left as it is; throws as openForReading does. */
export function readProject(path: string): ProjectStore {
  return storeOf(path, openForReading(path))
}

function storeOf(path: string, opened: OpenedDatabase) {
  const { db, readOnly, notice } = opened
  const sources = createSourceRepository(db)
  const packed = createPackedRepository(db)
  const trash = createTrashRepository(db)
  const name = db.prepare<[], string>('SELECT name FROM project WHERE id = 1').pluck()
  return {
    path,
    readOnly,
    notice,
    name: (): string => name.get() ?? '',
    sources,
    packed,
    trash,
    testers: createTesterRepository(db),
    products: createProductRepository(db),
    netlists: createNetlistRepository(db, sources),
    patternSets: createPatternSetRepository(db, sources, packed),
    runs: createRunRepository(db),
    budgets: createBudgetRepository(db),
    /** Makes one write of several. */
    together: (write: () => void): void => db.transaction(write)(),
    close(): void {
      if (!readOnly) trash.empty()
      closeDatabase(opened)
    },
  }
}
