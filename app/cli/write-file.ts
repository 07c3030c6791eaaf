import { open, realpath, rename, rm, stat, type FileHandle } from 'node:fs/promises'
import { basename, dirname, join, resolve } from 'node:path'
import { UsageError } from './arguments.ts'

/** Throws a UsageError where a file can't be written there, before any work is done for it. */
export async function checkOutput(option: string, path: string, inputs: readonly string[]): Promise<void> {
  const refuse = (why: string): never => {
    throw new UsageError(`--${option} ${path}: ${why}`)
  }
  if (inputs.some((input) => resolve(input) === resolve(path)))
    refuse('this file is read by the same command.')
  const folder = await stat(dirname(resolve(path))).catch(() => null)
  if (folder === null || !folder.isDirectory()) refuse(`there is no folder ${dirname(path)}.`)
  if ((await stat(path).catch(() => null))?.isDirectory() === true) refuse('this is a folder.')
}

/**
 * Writes a file under another name beside its place and moves it there once it is whole. What is no ordinary file, such as
 * a device or a pipe, is written to as it stands.
 */
export async function writeFile(path: string, parts: Iterable<string | Uint8Array>): Promise<void> {
  const found = await stat(path).catch(() => null)
  if (found !== null && !found.isFile()) return writeInto(await open(path, 'w'), parts)
  const target = found === null ? path : await realpath(path)
  const temporary = join(dirname(target), `.${basename(target)}.${process.pid}.part`)
  try {
    await writeInto(await open(temporary, 'w'), parts)
    await rename(temporary, target)
  } catch (error) {
    await rm(temporary, { force: true })
    throw error
  }
}

async function writeInto(file: FileHandle, parts: Iterable<string | Uint8Array>): Promise<void> {
  try {
    await file.writeFile(parts)
  } finally {
    await file.close()
  }
}
