import { closeSync, fsyncSync, mkdirSync, openSync, readFileSync, renameSync, writeSync } from 'node:fs'
import { dirname } from 'node:path'

export type UserFile<T> = {
  read(): T
  write(value: T): void
}

/**
 * A small JSON file in the user's own folder. It is written beside itself and renamed, so that a crash leaves the old or the
 * new one whole. One that can't be read or is not understood counts as absent and is kept as `.bak`.
 */
export function userFile<T>(path: string, parse: (found: unknown) => T): UserFile<T> {
  return {
    read() {
      let text: string
      try {
        text = readFileSync(path, 'utf8')
      } catch {
        return parse(undefined)
      }
      try {
        return parse(JSON.parse(text))
      } catch {
        renameSync(path, `${path}.bak`)
        return parse(undefined)
      }
    },
    write(value) {
      mkdirSync(dirname(path), { recursive: true })
      const beside = `${path}.new`
      const file = openSync(beside, 'w')
      try {
        writeSync(file, `${JSON.stringify(value, null, 2)}\n`)
        fsyncSync(file)
      } finally {
        closeSync(file)
      }
      renameSync(beside, path)
    },
  }
}
