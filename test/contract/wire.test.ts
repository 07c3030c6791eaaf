import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { decodeWire, encodeWire } from '../../app/contract/wire.ts'

describe('wire', () => {
  test('gives back plain values and columns at any depth', () => {
    const value = {
      ok: true,
      value: {
        name: 'µ „Zähler“ 🂡',
        orders: [{ detected: Float64Array.of(0, -1.5, NaN, Infinity), pattern: Uint32Array.of(2 ** 32 - 1) }],
        bytes: new Uint8Array(0),
        nothing: null,
      },
    }
    expect(decodeWire(encodeWire(value))).toEqual(value)
    expect(decodeWire(encodeWire(Uint8Array.of(1, 2, 3)))).toEqual(Uint8Array.of(1, 2, 3))
    expect(decodeWire(encodeWire(undefined))).toBeNull()
  })

  test('any JSON value with columns in it survives, wherever the message lies in its buffer', () => {
    const column = fc.oneof(fc.uint8Array(), fc.uint32Array(), fc.float64Array())
    const value = fc.letrec((tie) => ({
      node: fc.oneof({ maxDepth: 4 }, fc.string(), fc.integer(), column, fc.constant(null), tie('list')),
      list: fc.oneof(
        fc.array(tie('node'), { maxLength: 4 }),
        fc.dictionary(
          fc.string().filter((key) => key !== '__proto__'),
          tie('node'),
          { maxKeys: 4, noNullPrototype: true },
        ),
      ),
    })).node
    fc.assert(
      fc.property(value, fc.nat({ max: 9 }), (given, shift) => {
        const message = encodeWire(given)
        const moved = new Uint8Array(message.length + shift)
        moved.set(message, shift)
        expect(decodeWire(moved.subarray(shift))).toEqual(given)
      }),
      { numRuns: 200, seed: 1 },
    )
  })

  test('refuses what is no message instead of reading past it', () => {
    const message = encodeWire({ column: Float64Array.of(1, 2, 3) })
    for (let length = 0; length < message.length; length++) {
      expect(() => decodeWire(message.subarray(0, length))).toThrow()
    }
    expect(() => decodeWire(Uint8Array.of(255, 255, 255, 255, 0))).toThrow(RangeError)
  })

  test('a column can name no place outside its value', () => {
    for (const path of [['constructor'], ['__proto__', 'polluted'], ['a', 'b', 'c']]) {
      const header = new TextEncoder().encode(
        JSON.stringify({ value: { a: {} }, columns: [{ path, type: 'u8', at: 0, length: 0 }] }),
      )
      const message = new Uint8Array(4 + header.length + 8)
      new DataView(message.buffer).setUint32(0, header.length, true)
      message.set(header, 4)
      expect(() => decodeWire(message)).toThrow('a place that the message does not have')
    }
  })
})
