import { gates, nNets, pins, values, masks } from './memory'
import { PLANE_SHIFT, WIDE, none } from './plane'

/** Classes of gates, as the packer numbers them; all but SOURCE are followed by their inversions in two bits. */
export const SOURCE: u32 = 0
export const ONE_INPUT: u32 = 1
export const AND_2: u32 = 2
export const XOR_2: u32 = 3
export const AND_N: u32 = 4
export const XOR_N: u32 = 5

// @ts-ignore: decorator
@inline
export function and2(a: usize, b: usize, inward: v128, outward: v128, at: usize): v128 {
  return v128.xor(v128.and(v128.xor(v128.load(a + at), inward), v128.xor(v128.load(b + at), inward)), outward)
}

// @ts-ignore: decorator
@inline
export function xor2(a: usize, b: usize, outward: v128, at: usize): v128 {
  return v128.xor(v128.xor(v128.load(a + at), v128.load(b + at)), outward)
}

/** One lane of a gate with any number of inputs, its pins listed from `pin` to `end`. */
// @ts-ignore: decorator
@inline
export function andN(pin: usize, end: usize, base: usize, inward: v128, outward: v128, at: usize): v128 {
  let all = v128.xor(v128.load(base + (<usize>(load<u32>(pin) >> 1) << PLANE_SHIFT) + at), inward)
  for (let next = pin + 4; next < end; next += 4) {
    all = v128.and(all, v128.xor(v128.load(base + (<usize>(load<u32>(next) >> 1) << PLANE_SHIFT) + at), inward))
  }
  return v128.xor(all, outward)
}

// @ts-ignore: decorator
@inline
export function xorN(pin: usize, end: usize, base: usize, outward: v128, at: usize): v128 {
  let odd = outward
  for (let next = pin; next < end; next += 4) {
    odd = v128.xor(odd, v128.load(base + (<usize>(load<u32>(next) >> 1) << PLANE_SHIFT) + at))
  }
  return odd
}

/** Computes the fault-free values of all gates, two-valued, in the order of the nets. */
export function evaluateGoodTwoValued(): void {
  const base = values
  let record = gates
  let to = base
  const end = gates + (<usize>nNets << 4)
  for (; record < end; record += 16, to += 1 << PLANE_SHIFT) {
    const op = load<u32>(record)
    const kind = op >> 2
    if (kind == SOURCE) continue
    const inversions = masks + (<usize>(op & 3) << 5)
    const inward = v128.load(inversions, 0)
    const outward = v128.load(inversions, 16)
    if (kind <= AND_2) {
      const a = base + (<usize>load<u32>(record, 4) << PLANE_SHIFT)
      const b = base + (<usize>load<u32>(record, 8) << PLANE_SHIFT)
      v128.store(to, and2(a, b, inward, outward, 0), 0)
      v128.store(to, and2(a, b, inward, outward, 16), 16)
      if (WIDE) {
        v128.store(to, and2(a, b, inward, outward, 32), 32)
        v128.store(to, and2(a, b, inward, outward, 48), 48)
      }
    } else if (kind == XOR_2) {
      const a = base + (<usize>load<u32>(record, 4) << PLANE_SHIFT)
      const b = base + (<usize>load<u32>(record, 8) << PLANE_SHIFT)
      v128.store(to, xor2(a, b, outward, 0), 0)
      v128.store(to, xor2(a, b, outward, 16), 16)
      if (WIDE) {
        v128.store(to, xor2(a, b, outward, 32), 32)
        v128.store(to, xor2(a, b, outward, 48), 48)
      }
    } else {
      const pin = pins + (<usize>load<u32>(record, 4) << 2)
      const end = pin + (<usize>load<u32>(record, 8) << 2)
      if (kind == AND_N) {
        v128.store(to, andN(pin, end, base, inward, outward, 0), 0)
        v128.store(to, andN(pin, end, base, inward, outward, 16), 16)
        if (WIDE) {
          v128.store(to, andN(pin, end, base, inward, outward, 32), 32)
          v128.store(to, andN(pin, end, base, inward, outward, 48), 48)
        }
      } else {
        v128.store(to, xorN(pin, end, base, outward, 0), 0)
        v128.store(to, xorN(pin, end, base, outward, 16), 16)
        if (WIDE) {
          v128.store(to, xorN(pin, end, base, outward, 32), 32)
          v128.store(to, xorN(pin, end, base, outward, 48), 48)
        }
      }
    }
  }
}
