import { readdirSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { expect, test } from 'vitest'
import { userFile } from '../../db/user-file.ts'
import { tempFolder } from '../helpers/temp-folder.ts'

const parse = (found: unknown): { size: number } => {
  const { size = 1 } = (found ?? {}) as { size?: number }
  if (typeof size !== 'number') throw new TypeError('no size')
  return { size }
}

test('a user file comes back as it was written, with nothing left beside it', () => {
  const folder = join(tempFolder(), 'not/there/yet')
  const file = userFile(join(folder, 'u.json'), parse)
  expect(file.read()).toEqual({ size: 1 })
  file.write({ size: 5 })
  file.write({ size: 6 })
  expect(file.read()).toEqual({ size: 6 })
  expect(readdirSync(folder)).toEqual(['u.json'])
})

test.each(['{"size": 3', '{"size": "large"}', '\0\0\0\0'])(
  'what is not understood is kept aside: %j',
  (text) => {
    const path = join(tempFolder(), 'u.json')
    writeFileSync(path, text)
    expect(userFile(path, parse).read()).toEqual({ size: 1 })
    expect(readFileSync(`${path}.bak`, 'utf8')).toBe(text)
  },
)
