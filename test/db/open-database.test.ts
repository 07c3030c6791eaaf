import { copyFileSync, existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import Sqlite from 'better-sqlite3'
import { describe, expect, test } from 'vitest'
import { APPLICATION_ID } from '../../db/open-database.ts'
import { createProject, openProject } from '../../db/open-project.ts'
import { tempFolder } from '../helpers/temp-folder.ts'

function projectFile(name = 'p.tallycut'): string {
  const path = join(tempFolder(), name)
  createProject(path, 'A project', 1).close()
  return path
}

describe('a project file', () => {
  test('says in its header what it is, and refers to rows that are there', () => {
    const path = projectFile()
    const db = new Sqlite(path)
    expect(db.pragma('application_id', { simple: true })).toBe(APPLICATION_ID)
    expect(db.pragma('journal_mode', { simple: true })).toBe('wal')
    // SOURCE: SQLite's documentation, "Strict tables" and "The sqlite_schema table".
    const loose = db
      .prepare(
        "SELECT name FROM pragma_table_list WHERE schema = 'main' AND type = 'table' AND strict = 0 AND name NOT LIKE 'sqlite%'",
      )
      .all()
    expect(loose).toEqual([])
    db.close()
  })

  test('is not created over another file', () => {
    const path = projectFile()
    expect(() => createProject(path, 'Another', 2)).toThrow(/There is a file at/)
    const store = openProject(path)
    expect(store.name()).toBe('A project')
    store.close()
  })

  test('of a newer version opens for reading only, and stays as it is', () => {
    const path = projectFile()
    const db = new Sqlite(path)
    db.pragma('user_version = 999')
    db.close()
    const before = readFileSync(path)
    const store = openProject(path)
    expect(store).toMatchObject({ readOnly: true, notice: expect.stringMatching(/newer version/) })
    expect(store.name()).toBe('A project')
    store.close()
    expect(readFileSync(path)).toEqual(before)
  })

  test('that is in use is not opened a second time', () => {
    const path = projectFile()
    const store = openProject(path)
    expect(() => openProject(path)).toThrow(expect.objectContaining({ code: 'in-use' }))
    store.close()
    openProject(path).close()
  })
})

describe('what is no sound project', () => {
  const cases: readonly (readonly [string, string, (path: string) => void])[] = [
    ['a missing file', 'not-found', () => undefined],
    ['a folder', 'not-a-project', (path) => mkdirSync(path)],
    ['an empty file', 'not-a-project', (path) => writeFileSync(path, '')],
    ['a text', 'not-a-project', (path) => writeFileSync(path, 'INPUT(a)\n'.repeat(1000))],
    [
      'noise',
      'not-a-project',
      (path) => writeFileSync(path, Buffer.from('89504e470d0a1a0a00'.repeat(500), 'hex')),
    ],
    [
      "another program's database",
      'not-a-project',
      (path) => {
        const db = new Sqlite(path)
        db.exec('CREATE TABLE t (a)')
        db.close()
      },
    ],
    [
      'a project cut off in the middle',
      'damaged-project',
      (path) => {
        copyFileSync(projectFile('whole.tallycut'), path)
        const bytes = readFileSync(path)
        writeFileSync(path, bytes.subarray(0, Math.floor(bytes.length / 2)))
      },
    ],
    [
      'a project with pages overwritten',
      'damaged-project',
      (path) => {
        copyFileSync(projectFile('whole.tallycut'), path)
        const bytes = readFileSync(path)
        bytes.fill(0xa5, 4096, bytes.length)
        writeFileSync(path, bytes)
      },
    ],
  ]

  test.each(cases)('%s is refused and left as it is', (_, code, make) => {
    const path = join(tempFolder(), 'x.tallycut')
    make(path)
    const before = code !== 'not-found' && !path.endsWith('/') ? contentOf(path) : null
    expect(() => openProject(path)).toThrow(expect.objectContaining({ code }))
    if (before !== null) expect(contentOf(path)).toEqual(before)
  })

  function contentOf(path: string): Buffer | string {
    try {
      return readFileSync(path)
    } catch {
      return existsSync(path) ? 'a folder' : 'nothing'
    }
  }
})
