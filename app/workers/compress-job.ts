import { createHash } from 'node:crypto'
import { gzipSync } from 'node:zlib'
import { DeskAnswer } from './desk-answer.ts'
import type { NamedBytes } from './load-netlist.ts'

export type CompressJob = {
  readonly input: { readonly files: readonly NamedBytes[] }
  readonly output: readonly {
    readonly name: string
    readonly sizeBytes: number
    readonly sha256: string
    readonly gzip: Uint8Array<ArrayBuffer>
  }[]
  readonly part: never
}

/** Makes files ready to be kept: their hash, and their bytes compressed unless they are already. */
export function compressJob({ files }: CompressJob['input']): DeskAnswer<CompressJob['output']> {
  const kept = files.map(({ name, bytes }) => ({
    name,
    sizeBytes: bytes.length,
    sha256: createHash('sha256').update(bytes).digest('hex'),
    gzip: new Uint8Array(isGzip(bytes) ? bytes : gzipSync(bytes, { level: 1 })),
  }))
  return new DeskAnswer(
    kept,
    kept.map(({ gzip }) => gzip.buffer),
  )
}

function isGzip(bytes: Uint8Array): boolean {
  return bytes[0] === 0x1f && bytes[1] === 0x8b
}
