import { gates, inputs, masks, values } from './memory'
import { PLANE_BYTES, PLANE_SHIFT } from './plane'

/**
 * A gate's record: 16 bytes. The first word holds its operation: inversions of the first input, of the second and of the
 * output in bits 0 to 2, the class from bit 3, and from bit 8 how the net is observed. OR is AND with inputs and output
 * inverted. Then come the slots of its two inputs, or the start and the number of its inputs in the table of listed ones
 * (slot << 1 | inverted), and where its fan-outs start.
 */
export const SOURCE: u32 = 0
/** Buffers and inverters: an AND whose two inputs are the same. */
export const ONE_INPUT: u32 = 1
export const AND_2: u32 = 2
export const XOR_2: u32 = 3
export const AND_N: u32 = 4
export const XOR_N: u32 = 5

// @ts-ignore: decorator
@inline
export function classOf(op: u32): u32 {
  return (op >> 3) & 7
}

/** Vectors of all 0 or all 1 for the inversions of an operation: first input, second, output. */
// @ts-ignore: decorator
@inline
export function inversions(op: u32): usize {
  return masks + <usize>(op & 7) * 48
}

// @ts-ignore: decorator
@inline
export function and2(a: usize, b: usize, aInverts: v128, bInverts: v128, inverts: v128, lane: usize): v128 {
  return v128.xor(v128.and(v128.xor(v128.load(a + lane), aInverts), v128.xor(v128.load(b + lane), bInverts)), inverts)
}

// @ts-ignore: decorator
@inline
export function xor2(a: usize, b: usize, inverts: v128, lane: usize): v128 {
  return v128.xor(v128.xor(v128.load(a + lane), v128.load(b + lane)), inverts)
}

// @ts-ignore: decorator
@inline
function listedInput(input: usize, lane: usize): v128 {
  const entry = load<u32>(input)
  return v128.xor(
    v128.load(values + (<usize>(entry >> 1) << PLANE_SHIFT) + lane),
    i32x4.splat(-<i32>(entry & 1)),
  )
}

/** One lane of an AND of the inputs listed from `input` to `end`. */
// @ts-ignore: decorator
@inline
export function andN(input: usize, end: usize, inverts: v128, lane: usize): v128 {
  let all = listedInput(input, lane)
  for (let next = input + 4; next < end; next += 4) all = v128.and(all, listedInput(next, lane))
  return v128.xor(all, inverts)
}

// @ts-ignore: decorator
@inline
export function xorN(input: usize, end: usize, inverts: v128, lane: usize): v128 {
  let odd = inverts
  for (let next = input; next < end; next += 4) odd = v128.xor(odd, listedInput(next, lane))
  return odd
}

/** Computes the fault-free values of the gates among nets `start` to `stop` − 1, two-valued. */
export function evaluateGoodTwoValued(start: u32, stop: u32): void {
  const base = values
  let record = gates + (<usize>start << 4)
  let to = base + (<usize>start << PLANE_SHIFT)
  const end = gates + (<usize>stop << 4)
  for (; record < end; record += 16, to += PLANE_BYTES) {
    const op = load<u32>(record)
    const kind = classOf(op)
    if (kind == SOURCE) continue
    const inverts = v128.load(inversions(op), 32)
    if (kind <= XOR_2) {
      const a = base + (<usize>load<u32>(record, 4) << PLANE_SHIFT)
      const b = base + (<usize>load<u32>(record, 8) << PLANE_SHIFT)
      if (kind <= AND_2) {
        const aInverts = v128.load(inversions(op), 0)
        const bInverts = v128.load(inversions(op), 16)
        v128.store(to, and2(a, b, aInverts, bInverts, inverts, 0), 0)
        v128.store(to, and2(a, b, aInverts, bInverts, inverts, 16), 16)
        v128.store(to, and2(a, b, aInverts, bInverts, inverts, 32), 32)
        v128.store(to, and2(a, b, aInverts, bInverts, inverts, 48), 48)
      } else {
        v128.store(to, xor2(a, b, inverts, 0), 0)
        v128.store(to, xor2(a, b, inverts, 16), 16)
        v128.store(to, xor2(a, b, inverts, 32), 32)
        v128.store(to, xor2(a, b, inverts, 48), 48)
      }
    } else {
      const input = inputs + (<usize>load<u32>(record, 4) << 2)
      const end = input + (<usize>load<u32>(record, 8) << 2)
      if (kind == AND_N) {
        v128.store(to, andN(input, end, inverts, 0), 0)
        v128.store(to, andN(input, end, inverts, 16), 16)
        v128.store(to, andN(input, end, inverts, 32), 32)
        v128.store(to, andN(input, end, inverts, 48), 48)
      } else {
        v128.store(to, xorN(input, end, inverts, 0), 0)
        v128.store(to, xorN(input, end, inverts, 16), 16)
        v128.store(to, xorN(input, end, inverts, 32), 32)
        v128.store(to, xorN(input, end, inverts, 48), 48)
      }
    }
  }
}
