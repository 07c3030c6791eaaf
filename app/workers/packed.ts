import { gunzipSync, gzipSync } from 'node:zlib'
import { decodeWire, encodeWire } from '../contract/wire.ts'

/** The size of the parts in which packed values are stored, so that none holds up whoever writes or reads it. */
const PART_BYTES = 1024 * 1024

/** Returns a value of plain data and columns as compressed bytes, cut into parts. */
export function packParts(value: unknown): Uint8Array<ArrayBuffer>[] {
  const bytes = gzipSync(encodeWire(value), { level: 1 })
  const parts: Uint8Array<ArrayBuffer>[] = []
  for (let at = 0; at < bytes.length; at += PART_BYTES) {
    parts.push(new Uint8Array(bytes.subarray(at, at + PART_BYTES)))
  }
  return parts
}

/** Returns the value behind all parts of it, in order. */
export function unpackParts(parts: readonly Uint8Array[]): unknown {
  const bytes = gunzipSync(Buffer.concat(parts))
  return decodeWire(new Uint8Array(bytes))
}
