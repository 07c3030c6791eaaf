import { isAscii, isUtf8 } from 'node:buffer'
import { createReadStream } from 'node:fs'
import { open, stat } from 'node:fs/promises'
import { Readable } from 'node:stream'
import { createGunzip } from 'node:zlib'
import type { Diagnostic, DiagnosticCode, Reading } from '../engine/source/diagnostic.ts'
import type { ReadingProgress } from '../engine/source/reading-progress.ts'
import type { Source } from '../engine/source/source.ts'

/** The largest text that is read: a little less than the longest string of the engine that runs us. */
export const MAX_SOURCE_BYTES = 500_000_000

/** How much of a file is looked at to tell text from noise. */
const HEAD_BYTES = 65_536
/** How much is read between two looks at whether to go on. */
const WHOLE_STEP = 2 << 20

export type SourceFileOptions = {
  /** The file's name as the user knows it; else the path. */
  readonly name?: string
  /** The most bytes that a text may have once unpacked. */
  readonly maxBytes?: number
  /** Called with bytes of the file read and its size; `false` stops the reading. */
  readonly onProgress?: ReadingProgress
  readonly signal?: AbortSignal
}

/**
 * Reads a file into a source, unpacking it where it is gzip, whatever its name. No value and no diagnostic where the
 * reading was stopped. Errors: unknown-name (no such file, or it can't be opened), wrong-file-type (a folder, a device),
 * empty-file, limit, truncated (gzip cut off or damaged), not-text. Text that is no UTF-8 is read as Latin-1, with a
 * warning.
 */
export async function readSourceFile(
  path: string,
  options: SourceFileOptions = {},
): Promise<Reading<Source>> {
  const name = options.name ?? path
  const maxBytes = options.maxBytes ?? MAX_SOURCE_BYTES
  let size: number
  try {
    const found = await stat(path)
    if (found.isDirectory()) {
      return failed(name, 'wrong-file-type', 'this is a folder', 'Choose a file in it.')
    }
    if (found.isFIFO()) return readStream(createReadStream(path), name, 0, options)
    if (!found.isFile()) return failed(name, 'wrong-file-type', 'this is no ordinary file')
    size = found.size
  } catch (reason) {
    return failed(name, 'unknown-name', openingProblem(reason))
  }
  if (size > maxBytes) return failed(name, 'limit', tooLarge(size, maxBytes))
  return (
    (await readUnpacked(path, name, size, options)) ??
    readStream(createReadStream(path, { highWaterMark: 1 << 20 }), name, size, options)
  )
}

/** Reads a file that is not packed into one buffer of its size, in fewer copies than a stream; null where it is packed. */
async function readUnpacked(
  path: string,
  name: string,
  size: number,
  { onProgress, signal }: SourceFileOptions,
): Promise<Reading<Source> | null> {
  const bytes = Buffer.allocUnsafeSlow(size)
  let done = 0
  try {
    const file = await open(path)
    try {
      while (done < size) {
        const { bytesRead } = await file.read(bytes, done, Math.min(WHOLE_STEP, size - done), done)
        if (bytesRead === 0) break
        if (done === 0 && isGzip(bytes)) return null
        done += bytesRead
        if (signal?.aborted === true || onProgress?.(done, size) === false) {
          return { value: null, diagnostics: [] }
        }
      }
    } finally {
      await file.close()
    }
  } catch (reason) {
    return failed(name, 'unknown-name', openingProblem(reason))
  }
  return decode(bytes.subarray(0, done), name)
}

function isGzip(bytes: Uint8Array): boolean {
  return bytes[0] === 0x1f && bytes[1] === 0x8b
}

/** The same for bytes that are at hand, such as a file that was dropped on a browser window. */
export async function readSourceBytes(
  bytes: Uint8Array,
  name: string,
  options: SourceFileOptions = {},
): Promise<Reading<Source>> {
  const step = 1 << 20
  function* parts(): Generator<Uint8Array, void, undefined> {
    for (let at = 0; at < bytes.length; at += step) yield bytes.subarray(at, at + step)
  }
  return readStream(Readable.from(parts()), name, bytes.length, options)
}

/** The same for a stream whose length is not known, such as standard input. */
export async function readSourceStream(
  stream: Readable,
  name: string,
  options: SourceFileOptions = {},
): Promise<Reading<Source>> {
  return readStream(stream, name, 0, options)
}

class Stopped extends Error {}
class TooLarge extends Error {}

async function readStream(
  stream: Readable,
  name: string,
  size: number,
  options: SourceFileOptions,
): Promise<Reading<Source>> {
  const { onProgress, signal, maxBytes = MAX_SOURCE_BYTES } = options
  const pieces: Buffer[] = []
  let total = 0
  let isPacked = false
  let done = 0
  const keep = (piece: Buffer): void => {
    total += piece.length
    if (total > maxBytes) throw new TooLarge()
    pieces.push(piece)
  }
  async function* watched(
    first: Buffer,
    rest: AsyncIterator<Buffer>,
  ): AsyncGenerator<Buffer, void, undefined> {
    let next: IteratorResult<Buffer> = { done: false, value: first }
    for (; next.done !== true; next = await rest.next()) {
      const piece = Buffer.from(next.value.buffer, next.value.byteOffset, next.value.byteLength)
      done += piece.length
      if (signal?.aborted === true || onProgress?.(Math.min(done, size), size) === false) throw new Stopped()
      yield piece
    }
  }
  try {
    const iterator = (stream as AsyncIterable<Buffer>)[Symbol.asyncIterator]()
    const start = await iterator.next()
    if (start.done === true) return failed(name, 'empty-file', 'the file is empty')
    isPacked = isGzip(start.value)
    const parts = watched(start.value, iterator)
    if (isPacked) {
      const packed = Readable.from(parts)
      const unpacked = createGunzip({ chunkSize: 1 << 18 })
      packed.on('error', (reason) => unpacked.destroy(reason))
      packed.pipe(unpacked)
      for await (const piece of unpacked) keep(piece as Buffer)
    } else for await (const piece of parts) keep(piece)
  } catch (reason) {
    if (reason instanceof Stopped) return { value: null, diagnostics: [] }
    if (reason instanceof TooLarge) {
      return failed(
        name,
        'limit',
        isPacked ? `unpacked, ${tooLarge(total, maxBytes)}` : tooLarge(total, maxBytes),
      )
    }
    if (isPacked && isGzipProblem(reason)) {
      return failed(
        name,
        'truncated',
        `the gzip data are ${(reason as { code?: string }).code === 'Z_BUF_ERROR' ? 'cut off' : 'damaged'} after ${total} bytes of text`,
        'Copy or pack the file again.',
      )
    }
    return failed(name, 'unknown-name', openingProblem(reason))
  } finally {
    stream.destroy()
  }
  return decode(Buffer.concat(pieces, total), name)
}

/** Turns bytes into text: UTF-16 by its byte order mark, UTF-8, else Latin-1; what has control characters is no text. */
function decode(bytes: Buffer, name: string): Reading<Source> {
  if (bytes.length === 0) return failed(name, 'empty-file', 'the file is empty')
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return text(new TextDecoder('utf-16le').decode(bytes))
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return text(new TextDecoder('utf-16be').decode(bytes))
  const noise = bytes.subarray(0, HEAD_BYTES).findIndex(isControl)
  if (noise >= 0) {
    return failed(
      name,
      'not-text',
      `this is no text: byte ${noise + 1} is ${bytes[noise]}`,
      'Expected a text file, or one packed with gzip.',
    )
  }
  if (isAscii(bytes)) return text(bytes.toString('latin1'))
  if (isUtf8(bytes)) return text(bytes.toString('utf8'))
  const first = firstNonUtf8(bytes)
  const warning: Diagnostic = {
    code: 'not-text',
    severity: 'warning',
    file: name,
    span: { start: first, end: first + 1 },
    message: 'the text is no UTF-8; it is read as Latin-1',
  }
  return { value: { name, text: bytes.toString('latin1') }, diagnostics: [warning] }

  function text(decoded: string): Reading<Source> {
    return { value: { name, text: decoded }, diagnostics: [] }
  }
}

/** Where UTF-8 ends in bytes that are not all of it, to the character; by halving. */
function firstNonUtf8(bytes: Buffer): number {
  let low = 0
  let high = bytes.length
  while (high - low > 4) {
    let middle = (low + high) >> 1
    for (let back = 0; back < 3 && ((bytes[middle] ?? 0) & 0xc0) === 0x80; back++) middle--
    if (middle > low && isUtf8(bytes.subarray(low, middle))) low = middle
    else high = middle > low ? middle : high - 1
  }
  while (low < high && (bytes[low] ?? 0) < 0x80) low++
  return low
}

/** Control characters that no text file has: all but tab, line ends, form feed and the old end-of-file sign. */
function isControl(byte: number): boolean {
  return (byte < 32 && byte !== 9 && byte !== 10 && byte !== 12 && byte !== 13 && byte !== 26) || byte === 127
}

function isGzipProblem(reason: unknown): boolean {
  return reason instanceof Error && /^Z_/.test((reason as { code?: string }).code ?? '')
}

function openingProblem(reason: unknown): string {
  const code = (reason as { code?: string } | null)?.code
  if (code === 'ENOENT' || code === 'ENOTDIR') return 'there is no such file'
  if (code === 'EACCES' || code === 'EPERM') return 'the file may not be read: no permission'
  return `the file could not be read: ${reason instanceof Error ? reason.message : String(reason)}`
}

function tooLarge(bytes: number, maxBytes: number): string {
  const mega = (count: number): string => `${Math.round(count / 1e6)} MB`
  return `the file has more than ${mega(Math.min(bytes, maxBytes))}; at most ${mega(maxBytes)} are read`
}

function failed(name: string, code: DiagnosticCode, message: string, hint?: string): Reading<never> {
  const finding: Diagnostic = { code, severity: 'error', file: name, span: { start: 0, end: 0 }, message }
  return { value: null, diagnostics: [hint === undefined ? finding : { ...finding, hint }] }
}
