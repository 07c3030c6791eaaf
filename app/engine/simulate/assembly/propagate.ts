import { fanouts, gates, masks, observability, pins, queue, summary, undo, values, watched, watchMasks, watchSlots } from './memory'
import { AND_2, AND_N, XOR_2, and2, andN, xor2, xorN } from './good'
import { PLANE_BYTES, PLANE_SHIFT, WIDE, flip, none } from './plane'
import { emptyQueue, pushFanouts, takeNext } from './queue'

const UNDO_BYTES: i32 = PLANE_BYTES + 16

/**
 * Finds in which patterns of the plane `live` a flip of the stem is observed, and writes them to `reached`. Both planes
 * are the caller's; `live` is left with the patterns in which it is not. Effects that one net alone carries are looked up
 * where `lookUp` says that the observability of all later nets is known.
 */
export function propagateFlip(stem: u32, live: usize, reached: usize, lookUp: bool): void {
  const base = values
  const bits = queue
  const words = summary
  let live0 = v128.load(live, 0)
  let live1 = v128.load(live, 16)
  let live2 = WIDE ? v128.load(live, 32) : none()
  let live3 = WIDE ? v128.load(live, 48) : none()
  let reached0 = none()
  let reached1 = none()
  let reached2 = none()
  let reached3 = none()

  let log = undo
  flip(base + (<usize>stem << PLANE_SHIFT), live)
  const stemRecord = gates + (<usize>stem << 4)
  let pending = pushFanouts(fanouts + (<usize>load<u32>(stemRecord, 12) << 2), fanouts + (<usize>load<u32>(stemRecord, 28) << 2), bits, words)
  let gate = stem
  while (pending > 0) {
    gate = takeNext(gate, bits, words)
    pending--
    const record = gates + (<usize>gate << 4)
    const op = load<u32>(record)
    const kind = op >> 2
    const inversions = masks + (<usize>(op & 3) << 5)
    const outward = v128.load(inversions, 16)
    let new0: v128, new1: v128, new2: v128 = none(), new3: v128 = none()
    if (kind <= XOR_2) {
      const a = base + (<usize>load<u32>(record, 4) << PLANE_SHIFT)
      const b = base + (<usize>load<u32>(record, 8) << PLANE_SHIFT)
      if (kind <= AND_2) {
        const inward = v128.load(inversions, 0)
        new0 = and2(a, b, inward, outward, 0)
        new1 = and2(a, b, inward, outward, 16)
        if (WIDE) {
          new2 = and2(a, b, inward, outward, 32)
          new3 = and2(a, b, inward, outward, 48)
        }
      } else {
        new0 = xor2(a, b, outward, 0)
        new1 = xor2(a, b, outward, 16)
        if (WIDE) {
          new2 = xor2(a, b, outward, 32)
          new3 = xor2(a, b, outward, 48)
        }
      }
    } else {
      const pin = pins + (<usize>load<u32>(record, 4) << 2)
      const end = pin + (<usize>load<u32>(record, 8) << 2)
      if (kind == AND_N) {
        const inward = v128.load(inversions, 0)
        new0 = andN(pin, end, base, inward, outward, 0)
        new1 = andN(pin, end, base, inward, outward, 16)
        if (WIDE) {
          new2 = andN(pin, end, base, inward, outward, 32)
          new3 = andN(pin, end, base, inward, outward, 48)
        }
      } else {
        new0 = xorN(pin, end, base, outward, 0)
        new1 = xorN(pin, end, base, outward, 16)
        if (WIDE) {
          new2 = xorN(pin, end, base, outward, 32)
          new3 = xorN(pin, end, base, outward, 48)
        }
      }
    }
    const at = base + (<usize>gate << PLANE_SHIFT)
    const good0 = v128.load(at, 0)
    const good1 = v128.load(at, 16)
    const good2 = WIDE ? v128.load(at, 32) : none()
    const good3 = WIDE ? v128.load(at, 48) : none()
    let diff0 = v128.and(v128.xor(new0, good0), live0)
    let diff1 = v128.and(v128.xor(new1, good1), live1)
    let diff2 = WIDE ? v128.and(v128.xor(new2, good2), live2) : none()
    let diff3 = WIDE ? v128.and(v128.xor(new3, good3), live3) : none()
    let any = v128.or(diff0, diff1)
    if (WIDE) any = v128.or(any, v128.or(diff2, diff3))
    if (!v128.any_true(any)) continue

    const watch = load<u8>(watched + gate)
    if (watch) {
      let seen0 = diff0, seen1 = diff1, seen2 = diff2, seen3 = diff3
      if (watch > 1) {
        const mask = watchMasks + (<usize>load<u32>(watchSlots + (<usize>gate << 2)) << PLANE_SHIFT)
        seen0 = v128.and(seen0, v128.load(mask, 0))
        seen1 = v128.and(seen1, v128.load(mask, 16))
        if (WIDE) {
          seen2 = v128.and(seen2, v128.load(mask, 32))
          seen3 = v128.and(seen3, v128.load(mask, 48))
        }
      }
      reached0 = v128.or(reached0, seen0)
      reached1 = v128.or(reached1, seen1)
      live0 = v128.andnot(live0, seen0)
      live1 = v128.andnot(live1, seen1)
      any = v128.or(live0, live1)
      if (WIDE) {
        reached2 = v128.or(reached2, seen2)
        reached3 = v128.or(reached3, seen3)
        live2 = v128.andnot(live2, seen2)
        live3 = v128.andnot(live3, seen3)
        any = v128.or(any, v128.or(live2, live3))
      }
      if (!v128.any_true(any)) break
      if (watch == 1) continue
      diff0 = v128.andnot(diff0, seen0)
      diff1 = v128.andnot(diff1, seen1)
      any = v128.or(diff0, diff1)
      if (WIDE) {
        diff2 = v128.andnot(diff2, seen2)
        diff3 = v128.andnot(diff3, seen3)
        any = v128.or(any, v128.or(diff2, diff3))
      }
      if (!v128.any_true(any)) continue
    }
    if (pending == 0 && lookUp) {
      const known = observability + (<usize>gate << PLANE_SHIFT)
      reached0 = v128.or(reached0, v128.and(diff0, v128.load(known, 0)))
      reached1 = v128.or(reached1, v128.and(diff1, v128.load(known, 16)))
      if (WIDE) {
        reached2 = v128.or(reached2, v128.and(diff2, v128.load(known, 32)))
        reached3 = v128.or(reached3, v128.and(diff3, v128.load(known, 48)))
      }
      break
    }
    v128.store(at, v128.xor(good0, diff0), 0)
    v128.store(at, v128.xor(good1, diff1), 16)
    v128.store(log, good0, 0)
    v128.store(log, good1, 16)
    if (WIDE) {
      v128.store(at, v128.xor(good2, diff2), 32)
      v128.store(at, v128.xor(good3, diff3), 48)
      v128.store(log, good2, 32)
      v128.store(log, good3, 48)
    }
    store<u32>(log + PLANE_BYTES, gate)
    log += UNDO_BYTES
    pending += pushFanouts(fanouts + (<usize>load<u32>(record, 12) << 2), fanouts + (<usize>load<u32>(record, 28) << 2), bits, words)
  }
  if (pending > 0) emptyQueue(gate, pending)

  while (log > undo) {
    log -= UNDO_BYTES
    const at = base + (<usize>load<u32>(log + PLANE_BYTES) << PLANE_SHIFT)
    v128.store(at, v128.load(log, 0), 0)
    v128.store(at, v128.load(log, 16), 16)
    if (WIDE) {
      v128.store(at, v128.load(log, 32), 32)
      v128.store(at, v128.load(log, 48), 48)
    }
  }
  flip(base + (<usize>stem << PLANE_SHIFT), live)
  v128.store(reached, reached0, 0)
  v128.store(reached, reached1, 16)
  if (WIDE) {
    v128.store(reached, reached2, 32)
    v128.store(reached, reached3, 48)
  }
}
