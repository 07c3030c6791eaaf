import { createHash } from 'node:crypto'
import { createReadStream } from 'node:fs'
import { basename } from 'node:path'
import type { InputFile } from '../../report/report-input.ts'

/** Returns what a report says of a file that was read: its name, size and hash as it lies on the disk. */
export async function inputFile(role: string, path: string): Promise<InputFile> {
  const hash = createHash('sha256')
  let sizeBytes = 0
  for await (const piece of createReadStream(path) as AsyncIterable<Buffer>) {
    hash.update(piece)
    sizeBytes += piece.length
  }
  return { role, name: basename(path), sha256: hash.digest('hex'), sizeBytes }
}
