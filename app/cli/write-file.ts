import { open, rename, rm, stat } from 'node:fs/promises'
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

/** Writes a file under another name beside its place and moves it there once it is whole. */
export async function writeFile(path: string, parts: Iterable<string | Uint8Array>): Promise<void> {
  const temporary = join(dirname(path), `.${basename(path)}.${process.pid}.part`)
  const file = await open(temporary, 'w')
  try {
    await file.writeFile(parts)
    await file.close()
    await rename(temporary, path)
  } catch (error) {
    await file.close().catch(() => undefined)
    await rm(temporary, { force: true })
    throw error
  }
}
