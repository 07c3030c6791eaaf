import { createHash } from 'node:crypto'
import type { StoredSource } from '../../db/repositories/source-repository.ts'
import type { CompressJob } from '../workers/compress-job.ts'

/** Returns compressed files with the part that each plays. */
export function withRoles(
  files: CompressJob['output'],
  roleAt: (index: number) => StoredSource['role'],
): StoredSource[] {
  return files.map((file, index) => ({ ...file, role: roleAt(index) }))
}

/** One hash for all files of a revision: that of its only file, else of the list of hashes. */
export function sourcesHash(sources: readonly StoredSource[]): string {
  const [only] = sources
  if (sources.length === 1 && only !== undefined) return only.sha256
  return createHash('sha256')
    .update(sources.map(({ sha256 }) => sha256).join('\n'))
    .digest('hex')
}
