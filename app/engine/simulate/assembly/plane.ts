/**
 * A plane is one bit for each pattern of a block, LANES vectors of 128 patterns. LANES is given to the compiler (2 or 4);
 * branches on WIDE vanish from the built kernel.
 */
// @ts-ignore: introduced by the build
export const WIDE: bool = LANES == 4
export const PLANE_SHIFT: i32 = WIDE ? 6 : 5
export const PLANE_BYTES: i32 = 1 << PLANE_SHIFT

// @ts-ignore: decorator
@inline
export function none(): v128 {
  return i64x2.splat(0)
}

// @ts-ignore: decorator
@inline
export function lane(plane: usize, at: usize): v128 {
  return v128.load(plane + at)
}

// @ts-ignore: decorator
@inline
export function clear(plane: usize): void {
  v128.store(plane, none(), 0)
  v128.store(plane, none(), 16)
  if (WIDE) {
    v128.store(plane, none(), 32)
    v128.store(plane, none(), 48)
  }
}

// @ts-ignore: decorator
@inline
export function copy(to: usize, from: usize): void {
  v128.store(to, v128.load(from, 0), 0)
  v128.store(to, v128.load(from, 16), 16)
  if (WIDE) {
    v128.store(to, v128.load(from, 32), 32)
    v128.store(to, v128.load(from, 48), 48)
  }
}

// @ts-ignore: decorator
@inline
export function flip(plane: usize, by: usize): void {
  v128.store(plane, v128.xor(v128.load(plane, 0), v128.load(by, 0)), 0)
  v128.store(plane, v128.xor(v128.load(plane, 16), v128.load(by, 16)), 16)
  if (WIDE) {
    v128.store(plane, v128.xor(v128.load(plane, 32), v128.load(by, 32)), 32)
    v128.store(plane, v128.xor(v128.load(plane, 48), v128.load(by, 48)), 48)
  }
}

// @ts-ignore: decorator
@inline
export function isEmpty(plane: usize): bool {
  let sum = v128.or(v128.load(plane, 0), v128.load(plane, 16))
  if (WIDE) sum = v128.or(sum, v128.or(v128.load(plane, 32), v128.load(plane, 48)))
  return !v128.any_true(sum)
}

// @ts-ignore: decorator
@inline
function ones(plane: usize, at: usize): u64 {
  return popcnt(load<u64>(plane + at)) + popcnt(load<u64>(plane + at + 8))
}

/** How many patterns of the plane are 1. */
export function count(plane: usize): u32 {
  let sum = ones(plane, 0) + ones(plane, 16)
  if (WIDE) sum += ones(plane, 32) + ones(plane, 48)
  return <u32>sum
}

/** The first pattern of the plane that is 1; there must be one. */
export function firstOf(plane: usize): u32 {
  let at: u32 = 0
  while (load<u64>(plane + (at << 3)) == 0) at++
  return (at << 6) + <u32>ctz(load<u64>(plane + (at << 3)))
}

export function patternsPerBlock(): u32 {
  return <u32>PLANE_BYTES << 3
}
