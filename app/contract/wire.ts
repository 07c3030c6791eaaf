/**
 * How requests and answers travel where JSON alone would not do: JSON with columns of numbers beside it.
 *
 *   u32      length of the header in bytes, little-endian
 *   header   JSON in UTF-8: { value, columns: [{ path, type, at, length }] }
 *   columns  each at an offset of its own that is a multiple of 8, counted from the start of the message
 *
 * `value` has null where a column belongs; `path` names that place key by key. Numbers are little-endian, as on every
 * machine that Node and Chromium run on.
 */
type Column = Uint8Array | Uint32Array | Float64Array

type ColumnType = 'u8' | 'u32' | 'f64'

type ColumnHeader = {
  readonly path: readonly (string | number)[]
  readonly type: ColumnType
  readonly at: number
  /** In elements. */
  readonly length: number
}

// Both exist in browsers and in Node; the library that this folder compiles against has neither.
declare const TextEncoder: new () => { encode(text: string): Uint8Array<ArrayBuffer> }
declare const TextDecoder: new (
  label: string,
  options: { fatal: boolean },
) => { decode(bytes: Uint8Array): string }

const PREFIX = 4
const ALIGNMENT = 8
const BYTES_OF: Readonly<Record<ColumnType, number>> = { u8: 1, u32: 4, f64: 8 }

/** Returns a message that holds a plain value: what JSON can say, and typed arrays anywhere in it. */
export function encodeWire(value: unknown): Uint8Array<ArrayBuffer> {
  const columns: Column[] = []
  const paths: (string | number)[][] = []
  const plain = withoutColumns(value, [], (column, path) => {
    columns.push(column)
    paths.push(path)
  })
  // Offsets stand in the header and depend on its length: they are counted from its end first, then shifted.
  let fromEnd = 0
  const placed = columns.map((column, index) => {
    const header = { path: paths[index] ?? [], type: typeOf(column), at: fromEnd, length: column.length }
    fromEnd = aligned(fromEnd + column.byteLength)
    return header
  })
  const bytes = new TextEncoder().encode(JSON.stringify({ value: plain ?? null, columns: placed }))
  const start = aligned(PREFIX + bytes.length)
  const message = new Uint8Array(columns.length === 0 ? PREFIX + bytes.length : start + fromEnd)
  new DataView(message.buffer).setUint32(0, bytes.length, true)
  message.set(bytes, PREFIX)
  columns.forEach((column, index) => {
    message.set(
      new Uint8Array(column.buffer, column.byteOffset, column.byteLength),
      start + (placed[index]?.at ?? 0),
    )
  })
  return message
}

/**
 * Returns the value of a message; its columns are views of the message's own bytes where these are aligned.
 * Throws RangeError or SyntaxError for what is no such message.
 */
export function decodeWire(message: Uint8Array): unknown {
  const bytes = message.byteOffset % ALIGNMENT === 0 ? message : message.slice()
  if (bytes.byteLength < PREFIX) throw new RangeError('the message is shorter than its own header')
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength)
  const headerEnd = PREFIX + view.getUint32(0, true)
  if (headerEnd > bytes.byteLength) throw new RangeError('the message ends inside its header')
  const text = new TextDecoder('utf-8', { fatal: true }).decode(bytes.subarray(PREFIX, headerEnd))
  const header = JSON.parse(text) as { value: unknown; columns?: readonly ColumnHeader[] }
  if (typeof header !== 'object' || header === null || !Array.isArray(header.columns)) {
    throw new RangeError('the message has no list of columns')
  }
  const start = aligned(headerEnd)
  for (const column of header.columns) place(header, column, columnAt(bytes, start, column))
  return header.value
}

function columnAt(bytes: Uint8Array, start: number, { type, at, length }: ColumnHeader): Column {
  const size = Object.hasOwn(BYTES_OF, type) ? BYTES_OF[type] : 0
  const fits =
    size > 0 &&
    Number.isSafeInteger(at) &&
    Number.isSafeInteger(length) &&
    at >= 0 &&
    length >= 0 &&
    at % ALIGNMENT === 0 &&
    start + at + length * size <= bytes.byteLength
  if (!fits) throw new RangeError('a column lies outside its message')
  const offset = bytes.byteOffset + start + at
  if (type === 'u8') return new Uint8Array(bytes.buffer, offset, length)
  if (type === 'u32') return new Uint32Array(bytes.buffer, offset, length)
  return new Float64Array(bytes.buffer, offset, length)
}

/** Puts a column where its path says; only places that the value itself has can be named. */
function place(header: object, { path }: ColumnHeader, column: Column): void {
  let holder = header as Record<string | number, unknown>
  let key: string | number = 'value'
  for (const step of Array.isArray(path) ? (path as readonly (string | number)[]) : []) {
    const next = holder[key]
    if (typeof next !== 'object' || next === null || !Object.hasOwn(next, step)) {
      throw new RangeError('a column belongs to a place that the message does not have')
    }
    holder = next as Record<string | number, unknown>
    key = step
  }
  holder[key] = column
}

function withoutColumns(
  value: unknown,
  path: (string | number)[],
  take: (column: Column, path: (string | number)[]) => void,
): unknown {
  if (typeof value !== 'object' || value === null) return value
  if (value instanceof Uint8Array || value instanceof Uint32Array || value instanceof Float64Array) {
    take(value, path)
    return null
  }
  if (ArrayBuffer.isView(value)) throw new TypeError('columns are Uint8Array, Uint32Array or Float64Array')
  if (Array.isArray(value)) return value.map((item, index) => withoutColumns(item, [...path, index], take))
  return Object.fromEntries(
    Object.entries(value).map(([key, item]) => [key, withoutColumns(item, [...path, key], take)]),
  )
}

function typeOf(column: Column): ColumnType {
  return column instanceof Uint8Array ? 'u8' : column instanceof Uint32Array ? 'u32' : 'f64'
}

function aligned(bytes: number): number {
  return Math.ceil(bytes / ALIGNMENT) * ALIGNMENT
}
