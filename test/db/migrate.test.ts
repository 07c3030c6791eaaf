import { existsSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import Sqlite from 'better-sqlite3'
import { describe, expect, test } from 'vitest'
import { migrate, versionOf, type Migration } from '../../db/migrate.ts'
import { migrations } from '../../db/migrations/index.ts'
import { tempFolder } from '../helpers/temp-folder.ts'

const first: Migration = { version: 1, name: 'one', up: (db) => db.exec('CREATE TABLE a (x INTEGER) STRICT') }
const second: Migration = { version: 2, name: 'two', up: (db) => db.exec('ALTER TABLE a ADD COLUMN y TEXT') }
const broken: Migration = {
  version: 2,
  name: 'broken',
  up(db) {
    db.exec('ALTER TABLE a ADD COLUMN z TEXT')
    db.exec('INSERT INTO nowhere VALUES (1)')
  },
}

describe('migrate', () => {
  test('the steps from an empty file give the schema in db/schema.sql', () => {
    const db = new Sqlite(':memory:')
    migrate(db, migrations)
    const statements = db
      .prepare<[], string>('SELECT sql FROM sqlite_schema WHERE sql IS NOT NULL ORDER BY type DESC, name')
      .pluck()
      .all()
    const golden = readFileSync(new URL('../../db/schema.sql', import.meta.url), 'utf8')
    expect(statements.map((sql) => `${sql};\n`).join('\n')).toBe(golden)
  })

  test('a step keeps the rows, and a copy from before it stands beside the file', () => {
    const path = join(tempFolder(), 'm.db')
    const db = new Sqlite(path)
    expect(migrate(db, [first])).toBeNull()
    db.exec('INSERT INTO a VALUES (7)')
    const copy = migrate(db, [first, second])
    expect(db.prepare('SELECT * FROM a').all()).toEqual([{ x: 7, y: null }])
    expect(versionOf(db)).toBe(2)
    db.close()
    expect(copy).toBe(`${path}.before-2.bak`)
    const before = new Sqlite(copy ?? '')
    expect([versionOf(before), before.prepare('SELECT * FROM a').all()]).toEqual([1, [{ x: 7 }]])
    before.close()
  })

  test('a step that fails leaves nothing of itself, and the copy is named', () => {
    const path = join(tempFolder(), 'm.db')
    const db = new Sqlite(path)
    migrate(db, [first])
    expect(() => migrate(db, [first, broken])).toThrow(`${path}.before-2.bak`)
    expect(versionOf(db)).toBe(1)
    expect(db.pragma('table_info(a)')).toHaveLength(1)
    expect(existsSync(`${path}.before-2.bak`)).toBe(true)
    db.close()
  })

  test('steps that are not numbered one by one are a fault of the program', () => {
    const db = new Sqlite(':memory:')
    expect(() => migrate(db, [second])).toThrow('migration 1 has the version 2')
  })
})
