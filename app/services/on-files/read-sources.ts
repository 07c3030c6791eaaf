import type { Source } from '../../engine/source/source.ts'
import { readSourceFile, readSourceStream } from '../../workers/read-source-file.ts'
import { progressOf, valueOf, type FileWork } from './file-work.ts'

/** Returns the texts of files, told apart by their paths; `-` is standard input. Throws as valueOf does. */
export async function readSources(paths: readonly string[], work: FileWork): Promise<Source[]> {
  const sources: Source[] = []
  for (const path of paths) sources.push(await readOne(path, work))
  return sources
}

/** The same for one file. */
export async function readOne(path: string, work: FileWork): Promise<Source> {
  const options = { signal: work.signal, onProgress: progressOf(work, `Reading ${path}`) }
  const reading =
    path === '-'
      ? await readSourceStream(work.stdin, '<standard input>', options)
      : await readSourceFile(path, options)
  return valueOf(work, reading, reading.value === null ? [] : [reading.value])
}
