import { existsSync, readFileSync } from 'node:fs'
import { resolve } from 'node:path'
import type { Source } from '../../app/engine/source/source.ts'

const folder = resolve(import.meta.dirname, '../../../shared/data')

/** Whether the open circuits, libraries and patterns lie beside the repository; suites that need them skip without. */
export const hasData: boolean = existsSync(folder)

if (!hasData) console.warn(`skipped where needed: there is no folder of test data at ${folder}`)

/** One of those files, by its path in the folder. */
export function readData(path: string): Source {
  return { name: path, text: readFileSync(resolve(folder, path), 'utf8') }
}
