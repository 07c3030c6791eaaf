import { readFileSync } from 'node:fs'
import { dirname, resolve } from 'node:path'
import type { Source } from '../../engine/source/source.ts'

/** Returns what a STIL file includes, by its name beside that file, or null where it can't be read. */
export function includedSource(by: Source, name: string): Source | null {
  const path = resolve(dirname(by.name), name)
  try {
    return { name: path, text: readFileSync(path, 'utf8') }
  } catch {
    return null
  }
}
