import { randomUUID } from 'node:crypto'
import { AppError } from '../contract/errors.ts'
import type { Handlers } from '../contract/handlers.ts'

/** A file as it was handed in. Its bytes lie where all threads can read them. */
export type GivenFile = { readonly name: string; readonly bytes: Uint8Array<SharedArrayBuffer> }

export type FileStore = ReturnType<typeof createFiles>

/** Keeps the bytes of files that were dropped or chosen until they are used or given up. */
export function createFiles() {
  const files = new Map<string, GivenFile>()
  const handlers: Pick<Handlers, 'files.add' | 'files.drop'> = {
    'files.add': ({ name, bytes }) => {
      const shared = new Uint8Array(new SharedArrayBuffer(bytes.byteLength))
      shared.set(bytes)
      const fileId = randomUUID()
      files.set(fileId, { name, bytes: shared })
      return { fileId, name, sizeBytes: bytes.byteLength }
    },
    'files.drop': ({ fileIds }) => {
      for (const fileId of fileIds) files.delete(fileId)
      return {}
    },
  }
  return {
    handlers,
    /** Throws AppError 'not-found' where one of them has been given up. */
    take: (fileIds: readonly string[]): GivenFile[] =>
      fileIds.map((fileId) => {
        const file = files.get(fileId)
        if (file === undefined)
          throw new AppError('not-found', 'The file is no longer at hand. Choose it again.')
        return file
      }),
  }
}
