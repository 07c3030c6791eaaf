import { mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { buildKernel } from '../../app/launch/build-kernel.mjs'

/** Builds the simulation kernel from its sources as they are and returns it. */
export async function freshKernel(): Promise<Uint8Array> {
  const folder = mkdtempSync(join(tmpdir(), 'tallycut-kernel-'))
  const output = join(folder, 'kernel.wasm')
  await buildKernel(output)
  const bytes = readFileSync(output)
  rmSync(folder, { recursive: true })
  return bytes
}
