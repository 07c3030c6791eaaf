import type { Migration } from '../migrate.ts'
import { firstTables } from './0001-first-tables.ts'

/** Every step from an empty file to the present schema, in order; a released step is never edited. */
export const migrations: readonly Migration[] = [firstTables]
