import { pass } from './block'
import {
  fanouts,
  gates,
  inputs,
  known,
  knownPass,
  observability,
  queue,
  scratch,
  summary,
  undo,
  values,
  watchMasks,
  watchSlots,
} from './memory'
import { AND_2, AND_N, XOR_2, and2, andN, classOf, inversions, xor2, xorN } from './two-valued-gates'
import { PLANE_BYTES, PLANE_SHIFT, WIDE, clear, copy, flip, none } from './plane'
import { emptyQueue, pushFanouts, takeNext } from './queue'
import { spend } from './work'

const UNDO_BYTES: i32 = PLANE_BYTES + 16

/** How a net is observed: not at all, in every pattern, or as its mask says. */
export const ALWAYS_WATCHED: u32 = 1
const STEM_BIT: u32 = 1 << 10

// @ts-ignore: decorator
@inline
export function watchOf(op: u32): u32 {
  return (op >> 8) & 3
}

const NOTE_BYTES: i32 = PLANE_BYTES + 16
const MAX_NOTES: i32 = 16
/** Where notes on lines that alone carried an effect are kept: past the planes that callers use. */
// @ts-ignore: decorator
@inline
function notes(): usize {
  return scratch + 16 * PLANE_BYTES
}

/** Notes that the net alone carries the effect in the patterns of the plane; returns the place of the next note. */
function note(at: usize, net: u32, plane0: v128, plane1: v128, plane2: v128, plane3: v128): usize {
  if (at >= notes() + MAX_NOTES * NOTE_BYTES) return at
  store<u32>(at + PLANE_BYTES, net)
  v128.store(at, plane0, 0)
  v128.store(at, plane1, 16)
  if (WIDE) {
    v128.store(at, plane2, 32)
    v128.store(at, plane3, 48)
  }
  return at + NOTE_BYTES
}

/** Adds what is now known of the noted nets: an effect there was observed in the patterns of `reached`, and in no others. */
function keepNotes(end: usize, reached: usize): void {
  for (let at = notes(); at < end; at += NOTE_BYTES) {
    const net = load<u32>(at + PLANE_BYTES)
    const knownAt = known + (<usize>net << PLANE_SHIFT)
    const seenAt = observability + (<usize>net << PLANE_SHIFT)
    const stamp = knownPass + (<usize>net << 2)
    if (load<u32>(stamp) != pass) {
      store<u32>(stamp, pass)
      clear(knownAt)
      clear(seenAt)
    }
    for (let lane = 0; lane < PLANE_BYTES; lane += 16) {
      const asked = v128.load(at + lane)
      v128.store(knownAt + lane, v128.or(v128.load(knownAt + lane), asked))
      v128.store(seenAt + lane, v128.or(v128.load(seenAt + lane), v128.and(asked, v128.load(reached + lane))))
    }
  }
}

/**
 * Finds in which patterns of the plane `live` a flip of the stem is observed, and writes them to `reached`. Where one net
 * alone carries the effect, its observability is looked up: that of any later net where `allKnown`, else that of stems
 * as far as it has been found out in this pass.
 */
export function propagateFlip(stem: u32, live: usize, reached: usize, allKnown: bool): void {
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
  let noted = notes()
  if (!allKnown) noted = note(noted, stem, live0, live1, live2, live3)
  let evaluated: u32 = 1
  const stemRecord = gates + (<usize>stem << 4)
  let pending = pushFanouts(fanouts + (<usize>load<u32>(stemRecord, 12) << 2), fanouts + (<usize>load<u32>(stemRecord, 28) << 2), bits, words)
  let gate = stem
  while (pending > 0) {
    gate = takeNext(gate, bits, words)
    pending--
    evaluated++
    const record = gates + (<usize>gate << 4)
    const op = load<u32>(record)
    const kind = classOf(op)
    const inverts = v128.load(inversions(op), 32)
    let new0: v128
    let new1: v128
    let new2: v128 = none()
    let new3: v128 = none()
    if (kind <= XOR_2) {
      const a = base + (<usize>load<u32>(record, 4) << PLANE_SHIFT)
      const b = base + (<usize>load<u32>(record, 8) << PLANE_SHIFT)
      if (kind <= AND_2) {
        const aInverts = v128.load(inversions(op), 0)
        const bInverts = v128.load(inversions(op), 16)
        new0 = and2(a, b, aInverts, bInverts, inverts, 0)
        new1 = and2(a, b, aInverts, bInverts, inverts, 16)
        if (WIDE) {
          new2 = and2(a, b, aInverts, bInverts, inverts, 32)
          new3 = and2(a, b, aInverts, bInverts, inverts, 48)
        }
      } else {
        new0 = xor2(a, b, inverts, 0)
        new1 = xor2(a, b, inverts, 16)
        if (WIDE) {
          new2 = xor2(a, b, inverts, 32)
          new3 = xor2(a, b, inverts, 48)
        }
      }
    } else {
      const input = inputs + (<usize>load<u32>(record, 4) << 2)
      const end = input + (<usize>load<u32>(record, 8) << 2)
      if (kind == AND_N) {
        new0 = andN(input, end, inverts, 0)
        new1 = andN(input, end, inverts, 16)
        if (WIDE) {
          new2 = andN(input, end, inverts, 32)
          new3 = andN(input, end, inverts, 48)
        }
      } else {
        new0 = xorN(input, end, inverts, 0)
        new1 = xorN(input, end, inverts, 16)
        if (WIDE) {
          new2 = xorN(input, end, inverts, 32)
          new3 = xorN(input, end, inverts, 48)
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

    const watch = watchOf(op)
    if (watch) {
      let seen0 = diff0, seen1 = diff1, seen2 = diff2, seen3 = diff3
      if (watch != ALWAYS_WATCHED) {
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
      if (watch == ALWAYS_WATCHED) continue
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
    if (pending == 0) {
      const seenAt = observability + (<usize>gate << PLANE_SHIFT)
      if (allKnown) {
        reached0 = v128.or(reached0, v128.and(diff0, v128.load(seenAt, 0)))
        reached1 = v128.or(reached1, v128.and(diff1, v128.load(seenAt, 16)))
        if (WIDE) {
          reached2 = v128.or(reached2, v128.and(diff2, v128.load(seenAt, 32)))
          reached3 = v128.or(reached3, v128.and(diff3, v128.load(seenAt, 48)))
        }
        break
      }
      if (op & STEM_BIT) {
        if (load<u32>(knownPass + (<usize>gate << 2)) == pass) {
          const knownAt = known + (<usize>gate << PLANE_SHIFT)
          reached0 = v128.or(reached0, v128.and(diff0, v128.load(seenAt, 0)))
          reached1 = v128.or(reached1, v128.and(diff1, v128.load(seenAt, 16)))
          diff0 = v128.andnot(diff0, v128.load(knownAt, 0))
          diff1 = v128.andnot(diff1, v128.load(knownAt, 16))
          any = v128.or(diff0, diff1)
          if (WIDE) {
            reached2 = v128.or(reached2, v128.and(diff2, v128.load(seenAt, 32)))
            reached3 = v128.or(reached3, v128.and(diff3, v128.load(seenAt, 48)))
            diff2 = v128.andnot(diff2, v128.load(knownAt, 32))
            diff3 = v128.andnot(diff3, v128.load(knownAt, 48))
            any = v128.or(any, v128.or(diff2, diff3))
          }
          if (!v128.any_true(any)) break
        }
        live0 = diff0
        live1 = diff1
        live2 = diff2
        live3 = diff3
        noted = note(noted, gate, diff0, diff1, diff2, diff3)
      }
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
  }  if (!allKnown) keepNotes(noted, reached)
  spend(evaluated)
}
