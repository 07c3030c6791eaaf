import { gates, masks, nNets, pins, values } from './memory'
import { AND_2, AND_N, SOURCE, XOR_2 } from './two-valued-gates'
import { PLANE_BYTES, PLANE_SHIFT, WIDE, none } from './plane'

/**
 * Three-valued gates (Kleene): a net has two planes, "known 1" and "known 0", one after the other; where both are 0 it
 * is X. Inverting a net is reading or writing its planes the other way round, so OR is AND on swapped planes.
 */
export const NET_SHIFT: i32 = PLANE_SHIFT + 1

/** Offset of the plane that an AND reads as "known 1" of its inputs, or writes of its output. */
// @ts-ignore: decorator
@inline
export function truthOfInputs(op: u32): usize {
  return <usize>(op & 1) << PLANE_SHIFT
}

// @ts-ignore: decorator
@inline
export function truthOfOutput(op: u32): usize {
  return <usize>(op & 2) << (PLANE_SHIFT - 1)
}

// @ts-ignore: decorator
@inline
export function netValue(slot: u32): usize {
  return values + (<usize>slot << NET_SHIFT)
}

// @ts-ignore: decorator
@inline
function evaluateLane(record: usize, op: u32, to: usize, lane: usize): void {
  const kind = op >> 2
  let one: v128
  let zero: v128
  if (kind <= XOR_2) {
    const a = netValue(load<u32>(record, 4)) + lane
    const b = netValue(load<u32>(record, 8)) + lane
    if (kind <= AND_2) {
      const truth = truthOfInputs(op)
      one = v128.and(v128.load(a + truth), v128.load(b + truth))
      zero = v128.or(v128.load(a + (truth ^ PLANE_BYTES)), v128.load(b + (truth ^ PLANE_BYTES)))
    } else {
      const a1 = v128.load(a)
      const a0 = v128.load(a + PLANE_BYTES)
      const b1 = v128.load(b)
      const b0 = v128.load(b + PLANE_BYTES)
      one = v128.or(v128.and(a1, b0), v128.and(a0, b1))
      zero = v128.or(v128.and(a1, b1), v128.and(a0, b0))
    }
  } else {
    let pin = pins + (<usize>load<u32>(record, 4) << 2)
    const end = pin + (<usize>load<u32>(record, 8) << 2)
    const truth = kind == AND_N ? truthOfInputs(op) : 0
    const firstValue = netValue(load<u32>(pin) >> 1) + lane
    one = v128.load(firstValue + truth)
    zero = v128.load(firstValue + (truth ^ PLANE_BYTES))
    for (pin += 4; pin < end; pin += 4) {
      const value = netValue(load<u32>(pin) >> 1) + lane
      const b1 = v128.load(value + truth)
      const b0 = v128.load(value + (truth ^ PLANE_BYTES))
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
  const out = truthOfOutput(op)
  v128.store(to + lane + out, one)
  v128.store(to + lane + (out ^ PLANE_BYTES), zero)
}

/** Writes both planes of a gate's output, computed from its inputs, to `to`. */
// @ts-ignore: decorator
@inline
export function evaluateGate(record: usize, op: u32, to: usize): void {
  evaluateLane(record, op, to, 0)
  evaluateLane(record, op, to, 16)
  if (WIDE) {
    evaluateLane(record, op, to, 32)
    evaluateLane(record, op, to, 48)
  }
}

/** Computes the fault-free values of all gates, three-valued, in the order of the nets. */
export function evaluateGoodThreeValued(): void {
  let record = gates
  for (let slot: u32 = 0; slot < nNets; slot++, record += 16) {
    const op = load<u32>(record)
    if (op >> 2 != SOURCE) evaluateGate(record, op, netValue(slot))
  }
}
