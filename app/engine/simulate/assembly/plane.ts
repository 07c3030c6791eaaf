/**
 * A plane is one bit for each of the 512 patterns of a block: four vectors of 128. What works on planes comes in two
 * widths, chosen by a type parameter: Wide takes the whole plane, Narrow the first vector alone, for the few patterns with
 * which dropping begins.
 */
export const PLANE_SHIFT: i32 = 6
export const PLANE_BYTES: i32 = 1 << PLANE_SHIFT

export type Narrow = u8
export type Wide = u32

/** Bytes of a plane that are worked on in this width; a constant in the built kernel. */
// @ts-ignore: decorator
@inline
export function bytesOf<W>(): i32 {
  return isWide<W>() ? PLANE_BYTES : 16
}

// @ts-ignore: decorator
@inline
export function isWide<W>(): bool {
  return sizeof<W>() == sizeof<Wide>()
}

export function patternsPerBlock(): u32 {
  return <u32>PLANE_BYTES << 3
}

// @ts-ignore: decorator
@inline
export function none(): v128 {
  return i64x2.splat(0)
}

// @ts-ignore: decorator
@inline
export function clear<W>(plane: usize): void {
  v128.store(plane, none(), 0)
  if (isWide<W>()) {
    v128.store(plane, none(), 16)
    v128.store(plane, none(), 32)
    v128.store(plane, none(), 48)
  }
}

// @ts-ignore: decorator
@inline
export function copy<W>(to: usize, from: usize): void {
  v128.store(to, v128.load(from, 0), 0)
  if (isWide<W>()) {
    v128.store(to, v128.load(from, 16), 16)
    v128.store(to, v128.load(from, 32), 32)
    v128.store(to, v128.load(from, 48), 48)
  }
}

/** Takes from the plane what is not in `by`, or, inverted, what is. */
// @ts-ignore: decorator
@inline
export function keep<W>(plane: usize, by: usize, inverts: v128): void {
  v128.store(plane, v128.and(v128.load(plane, 0), v128.xor(v128.load(by, 0), inverts)), 0)
  if (isWide<W>()) {
    v128.store(plane, v128.and(v128.load(plane, 16), v128.xor(v128.load(by, 16), inverts)), 16)
    v128.store(plane, v128.and(v128.load(plane, 32), v128.xor(v128.load(by, 32), inverts)), 32)
    v128.store(plane, v128.and(v128.load(plane, 48), v128.xor(v128.load(by, 48), inverts)), 48)
  }
}

// @ts-ignore: decorator
@inline
export function add<W>(plane: usize, by: usize): void {
  v128.store(plane, v128.or(v128.load(plane, 0), v128.load(by, 0)), 0)
  if (isWide<W>()) {
    v128.store(plane, v128.or(v128.load(plane, 16), v128.load(by, 16)), 16)
    v128.store(plane, v128.or(v128.load(plane, 32), v128.load(by, 32)), 32)
    v128.store(plane, v128.or(v128.load(plane, 48), v128.load(by, 48)), 48)
  }
}

// @ts-ignore: decorator
@inline
export function flip<W>(plane: usize, by: usize): void {
  v128.store(plane, v128.xor(v128.load(plane, 0), v128.load(by, 0)), 0)
  if (isWide<W>()) {
    v128.store(plane, v128.xor(v128.load(plane, 16), v128.load(by, 16)), 16)
    v128.store(plane, v128.xor(v128.load(plane, 32), v128.load(by, 32)), 32)
    v128.store(plane, v128.xor(v128.load(plane, 48), v128.load(by, 48)), 48)
  }
}

// @ts-ignore: decorator
@inline
export function isEmpty<W>(plane: usize): bool {
  let sum = v128.load(plane, 0)
  if (isWide<W>()) {
    sum = v128.or(v128.or(sum, v128.load(plane, 16)), v128.or(v128.load(plane, 32), v128.load(plane, 48)))
  }
  return !v128.any_true(sum)
}

// @ts-ignore: decorator
@inline
function ones(plane: usize, at: usize): u64 {
  return popcnt(load<u64>(plane + at)) + popcnt(load<u64>(plane + at + 8))
}

/** How many patterns of the plane are 1. */
export function count<W>(plane: usize): u32 {
  let sum = ones(plane, 0)
  if (isWide<W>()) sum += ones(plane, 16) + ones(plane, 32) + ones(plane, 48)
  return <u32>sum
}

/** The first pattern of the plane that is 1; there must be one. */
export function firstOf(plane: usize): u32 {
  let at: u32 = 0
  while (load<u64>(plane + (at << 3)) == 0) at++
  return (at << 6) + <u32>ctz(load<u64>(plane + (at << 3)))
}
