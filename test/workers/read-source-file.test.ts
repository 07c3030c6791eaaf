import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { gzipSync } from 'node:zlib'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { readSourceBytes, readSourceFile } from '../../app/workers/read-source-file.ts'

let folder = ''
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'tallycut-'))
})
afterAll(() => rmSync(folder, { recursive: true }))

function file(name: string, bytes: Uint8Array | string): string {
  const path = join(folder, name)
  writeFileSync(path, bytes)
  return path
}

async function read(name: string, bytes: Uint8Array | string, options = {}) {
  return readSourceFile(file(name, bytes), { name, ...options })
}

const TEXT = 'INPUT(a)\n# größer 测试\n'

describe('readSourceFile', () => {
  it.each([
    ['plain', Buffer.from(TEXT)],
    ['packed by gzip, whatever its name', gzipSync(TEXT)],
    ['in UTF-16, low byte first', Buffer.from(`\ufeff${TEXT}`, 'utf16le')],
    ['in UTF-16, high byte first', Buffer.from(`\ufeff${TEXT}`, 'utf16le').swap16()],
  ])('reads a text %s', async (_, bytes) => {
    const { value, diagnostics } = await read('a.bench', bytes)
    expect(diagnostics).toEqual([])
    expect(value).toEqual({ name: 'a.bench', text: TEXT })
  })

  it('reads what is no UTF-8 as Latin-1, and warns with the place', async () => {
    const { value, diagnostics } = await read(
      'a',
      Buffer.from(`${'x'.repeat(1000)}gr\u00f6\u00dfer`, 'latin1'),
    )
    expect(value?.text.slice(-6)).toBe('größer')
    expect(diagnostics).toMatchObject([
      { code: 'not-text', severity: 'warning', span: { start: 1002, end: 1003 } },
    ])
  })

  it.each([
    ['an empty file', Buffer.from(''), 'empty-file'],
    ['an empty file inside gzip', gzipSync(''), 'empty-file'],
    ['noise', Buffer.from([0x7f, 0x45, 0x4c, 0x46, 0, 1, 2]), 'not-text'],
    ['noise inside gzip', gzipSync(Buffer.from([1, 2, 3, 0, 255])), 'not-text'],
    ['gzip that is cut off', gzipSync(TEXT.repeat(1000)).subarray(0, 60), 'truncated'],
    ['gzip that is damaged', damaged(gzipSync(TEXT.repeat(1000))), 'truncated'],
  ])('refuses %s', async (_, bytes, code) => {
    const { value, diagnostics } = await read('a', bytes)
    expect(value).toBeNull()
    expect(diagnostics).toMatchObject([{ code, severity: 'error', file: 'a' }])
  })

  it('refuses a folder, and a file that is not there', async () => {
    expect((await readSourceFile(folder)).diagnostics).toMatchObject([{ code: 'wrong-file-type' }])
    const missing = await readSourceFile(join(folder, 'nowhere'))
    expect(missing.diagnostics).toMatchObject([{ code: 'unknown-name', message: 'there is no such file' }])
  })

  it('stops unpacking at the limit, long before a small file has become a huge one', async () => {
    const bomb = gzipSync(Buffer.alloc(50_000_000, 32), { level: 9 })
    const { value, diagnostics } = await read('a.gz', bomb, { maxBytes: 1_000_000 })
    expect(value).toBeNull()
    expect(diagnostics).toMatchObject([{ code: 'limit' }])
    expect((await read('b', Buffer.alloc(2_000_000, 32), { maxBytes: 1_000_000 })).diagnostics).toMatchObject(
      [{ code: 'limit' }],
    )
  })

  it('tells how far it is, and stops when asked to', async () => {
    const path = file('large', 'x'.repeat(5_000_000))
    const seen: number[] = []
    await readSourceFile(path, { onProgress: (done, total) => seen.push(done / total) > 0 })
    expect(seen.length).toBeGreaterThan(2)
    expect(seen.at(-1)).toBe(1)
    const stopped = await readSourceFile(path, { onProgress: (done) => done < 2_000_000 })
    expect(stopped).toEqual({ value: null, diagnostics: [] })
    const aborted = await readSourceFile(path, { signal: AbortSignal.abort() })
    expect(aborted).toEqual({ value: null, diagnostics: [] })
  })
})

it('readSourceBytes reads bytes that are at hand like a file', async () => {
  expect((await readSourceBytes(gzipSync(TEXT), 'dropped.gz')).value).toEqual({
    name: 'dropped.gz',
    text: TEXT,
  })
  expect((await readSourceBytes(new Uint8Array(0), 'dropped')).diagnostics).toMatchObject([
    { code: 'empty-file' },
  ])
})

function damaged(packed: Buffer): Buffer {
  const bytes = Buffer.from(packed)
  bytes.fill(0xff, 20, 40)
  return bytes
}
