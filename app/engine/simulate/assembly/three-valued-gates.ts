import { gates, inputs, values } from './memory'
import { AND_2, AND_N, SOURCE, XOR_2, classOf } from './two-valued-gates'
import { PLANE_BYTES, PLANE_SHIFT, isWide, Wide } from './plane'

/**
 * Three-valued gates (Kleene): a net has two planes, "known 1" and "known 0", one after the other; where both are 0 it
 * is X. Inverting a net is reading or writing its planes the other way round, so OR is AND on swapped planes.
 */
export const NET_SHIFT: i32 = PLANE_SHIFT + 1

/** Offset of the plane in which a net, or an inverted one, is known to be 1. */
// @ts-ignore: decorator
@inline
export function planeOf(inverted: u32): usize {
  return <usize>inverted << PLANE_SHIFT
}

// @ts-ignore: decorator
@inline
export function netValue(slot: u32): usize {
  return values + (<usize>slot << NET_SHIFT)
}

// @ts-ignore: decorator
@inline
function evaluateLane(record: usize, op: u32, to: usize, lane: usize): void {
  const kind = classOf(op)
  let one: v128
  let zero: v128
  if (kind <= XOR_2) {
    const a = netValue(load<u32>(record, 4)) + lane
    const b = netValue(load<u32>(record, 8)) + lane
    if (kind <= AND_2) {
      const aTrue = planeOf(op & 1)
      const bTrue = planeOf((op >> 1) & 1)
      one = v128.and(v128.load(a + aTrue), v128.load(b + bTrue))
      zero = v128.or(v128.load(a + (aTrue ^ PLANE_BYTES)), v128.load(b + (bTrue ^ PLANE_BYTES)))
    } else {
      const a1 = v128.load(a)
      const a0 = v128.load(a + PLANE_BYTES)
      const b1 = v128.load(b)
      const b0 = v128.load(b + PLANE_BYTES)
      one = v128.or(v128.and(a1, b0), v128.and(a0, b1))
      zero = v128.or(v128.and(a1, b1), v128.and(a0, b0))
    }
  } else {
    let input = inputs + (<usize>load<u32>(record, 4) << 2)
    const end = input + (<usize>load<u32>(record, 8) << 2)
    const firstEntry = load<u32>(input)
    one = v128.load(netValue(firstEntry >> 1) + lane + planeOf(firstEntry & 1))
    zero = v128.load(netValue(firstEntry >> 1) + lane + (planeOf(firstEntry & 1) ^ PLANE_BYTES))
    for (input += 4; input < end; input += 4) {
      const entry = load<u32>(input)
      const value = netValue(entry >> 1) + lane
      const b1 = v128.load(value + planeOf(entry & 1))
      const b0 = v128.load(value + (planeOf(entry & 1) ^ PLANE_BYTES))
      if (kind == AND_N) {
        one = v128.and(one, b1)
        zero = v128.or(zero, b0)
      } else {
        const odd = v128.or(v128.and(one, b0), v128.and(zero, b1))
        zero = v128.or(v128.and(one, b1), v128.and(zero, b0))
        one = odd
      }
    }
  }
  const out = planeOf((op >> 2) & 1)
  v128.store(to + lane + out, one)
  v128.store(to + lane + (out ^ PLANE_BYTES), zero)
}

/** Writes both planes of a gate's output, computed from its inputs, to `to`. */
// @ts-ignore: decorator
@inline
export function evaluateGate<W>(record: usize, op: u32, to: usize): void {
  evaluateLane(record, op, to, 0)
  if (isWide<W>()) {
    evaluateLane(record, op, to, 16)
    evaluateLane(record, op, to, 32)
    evaluateLane(record, op, to, 48)
  }
}

/** Computes the fault-free values of the gates among nets `start` to `stop` − 1, three-valued. */
export function evaluateGoodThreeValued(start: u32, stop: u32): void {
  for (let slot = start; slot < stop; slot++) {
    const record = gates + (<usize>slot << 4)
    const op = load<u32>(record)
    if (classOf(op) != SOURCE) evaluateGate<Wide>(record, op, netValue(slot))
  }
}
