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
import { PLANE_BYTES, PLANE_SHIFT, add, bytesOf, clear, copy, flip, isEmpty, isWide, keep, none } from './plane'
import { emptyQueue, pushFanouts, takeNext } from './queue'
import { spend } from './work'

const ENTRY_BYTES: i32 = PLANE_BYTES + 16
const MAX_NOTES: i32 = 16

/** How a net is observed: not at all, in every pattern, or as its mask says. */
export const ALWAYS_WATCHED: u32 = 1
const STEM_BIT: u32 = 1 << 10

// @ts-ignore: decorator
@inline
export function watchOf(op: u32): u32 {
  return (op >> 8) & 3
}

/** Where the change of the gate at hand stands while it is looked at more closely. */
// @ts-ignore: decorator
@inline
function change(): usize {
  return scratch + 14 * PLANE_BYTES
}

/** Where notes on nets that alone carried an effect are kept: past the planes that callers use. */
// @ts-ignore: decorator
@inline
function notes(): usize {
  return scratch + 16 * PLANE_BYTES
}

/** Notes that the net alone carries the effect, in the patterns of the plane; returns the place of the next note. */
function note<W>(at: usize, net: u32, plane: usize): usize {
  if (at >= notes() + MAX_NOTES * ENTRY_BYTES) return at
  store<u32>(at + PLANE_BYTES, net)
  copy<W>(at, plane)
  return at + ENTRY_BYTES
}

/** Adds what is now known of the noted nets: an effect there was observed in the patterns of `reached`, and in no others. */
function keepNotes<W>(end: usize, reached: usize): void {
  for (let at = notes(); at < end; at += ENTRY_BYTES) {
    const net = load<u32>(at + PLANE_BYTES)
    const knownAt = known + (<usize>net << PLANE_SHIFT)
    const seenAt = observability + (<usize>net << PLANE_SHIFT)
    const stamp = knownPass + (<usize>net << 2)
    if (load<u32>(stamp) != pass) {
      store<u32>(stamp, pass)
      clear<W>(knownAt)
      clear<W>(seenAt)
    }
    add<W>(knownAt, at)
    keep<W>(at, reached, none())
    add<W>(seenAt, at)
  }
}

/** Takes the patterns in which the change is seen at the gate itself out of the change and of `live`, into `reached`. */
function seeAt<W>(gate: u32, watch: u32, live: usize, reached: usize): void {
  const plane = change()
  const mask = watchMasks + (<usize>load<u32>(watchSlots + (<usize>gate << 2)) << PLANE_SHIFT)
  for (let lane = 0; lane < bytesOf<W>(); lane += 16) {
    const changed = v128.load(plane + lane)
    const seen = watch == ALWAYS_WATCHED ? changed : v128.and(changed, v128.load(mask + lane))
    v128.store(reached + lane, v128.or(v128.load(reached + lane), seen))
    v128.store(live + lane, v128.andnot(v128.load(live + lane), seen))
    v128.store(plane + lane, v128.andnot(changed, seen))
  }
}

/** Adds to `reached` where the change of the gate is known to be observed, and takes out of it where anything is known. */
function lookUp<W>(gate: u32, allKnown: bool, reached: usize): void {
  const seenAt = observability + (<usize>gate << PLANE_SHIFT)
  if (!allKnown && load<u32>(knownPass + (<usize>gate << 2)) != pass) return
  const plane = change()
  const knownAt = known + (<usize>gate << PLANE_SHIFT)
  for (let lane = 0; lane < bytesOf<W>(); lane += 16) {
    const changed = v128.load(plane + lane)
    v128.store(reached + lane, v128.or(v128.load(reached + lane), v128.and(changed, v128.load(seenAt + lane))))
    v128.store(plane + lane, allKnown ? none() : v128.andnot(changed, v128.load(knownAt + lane)))
  }
}

/**
 * Finds in which patterns of the plane `live` a flip of the stem is observed, and writes them to `reached`; `live` is used
 * up. Where one net alone carries the effect, its observability is looked up: that of any later net where `allKnown`,
 * else that of stems as far as it has been found out in this pass.
 */
export function propagateFlip<W>(stem: u32, live: usize, reached: usize, allKnown: bool): void {
  const base = values
  const bits = queue
  const words = summary
  const plane = change()
  let noted = notes()
  if (!allKnown) noted = note<W>(noted, stem, live)
  clear<W>(reached)

  let log = undo
  const stemValue = base + (<usize>stem << PLANE_SHIFT)
  copy<W>(log, stemValue)
  store<u32>(log + PLANE_BYTES, stem)
  log += ENTRY_BYTES
  flip<W>(stemValue, live)
  const stemRecord = gates + (<usize>stem << 4)
  let pending = pushFanouts(stemRecord, bits, words)
  let gate = stem
  let evaluated: u32 = 1
  while (pending > 0) {
    gate = takeNext(gate, bits, words)
    pending--
    evaluated++
    const record = gates + (<usize>gate << 4)
    const op = load<u32>(record)
    const kind = classOf(op)
    const inverts = v128.load(inversions(op), 32)
    let new0: v128
    let new1 = none()
    let new2 = none()
    let new3 = none()
    if (kind <= XOR_2) {
      const a = base + (<usize>load<u32>(record, 4) << PLANE_SHIFT)
      const b = base + (<usize>load<u32>(record, 8) << PLANE_SHIFT)
      if (kind <= AND_2) {
        const aInverts = v128.load(inversions(op), 0)
        const bInverts = v128.load(inversions(op), 16)
        new0 = and2(a, b, aInverts, bInverts, inverts, 0)
        if (isWide<W>()) {
          new1 = and2(a, b, aInverts, bInverts, inverts, 16)
          new2 = and2(a, b, aInverts, bInverts, inverts, 32)
          new3 = and2(a, b, aInverts, bInverts, inverts, 48)
        }
      } else {
        new0 = xor2(a, b, inverts, 0)
        if (isWide<W>()) {
          new1 = xor2(a, b, inverts, 16)
          new2 = xor2(a, b, inverts, 32)
          new3 = xor2(a, b, inverts, 48)
        }
      }
    } else {
      const input = inputs + (<usize>load<u32>(record, 4) << 2)
      const end = input + (<usize>load<u32>(record, 8) << 2)
      if (kind == AND_N) {
        new0 = andN(input, end, inverts, 0)
        if (isWide<W>()) {
          new1 = andN(input, end, inverts, 16)
          new2 = andN(input, end, inverts, 32)
          new3 = andN(input, end, inverts, 48)
        }
      } else {
        new0 = xorN(input, end, inverts, 0)
        if (isWide<W>()) {
          new1 = xorN(input, end, inverts, 16)
          new2 = xorN(input, end, inverts, 32)
          new3 = xorN(input, end, inverts, 48)
        }
      }
    }
    const at = base + (<usize>gate << PLANE_SHIFT)
    const good0 = v128.load(at, 0)
    let changed0 = v128.and(v128.xor(new0, good0), v128.load(live, 0))
    let any = changed0
    let good1 = none()
    let good2 = none()
    let good3 = none()
    let changed1 = none()
    let changed2 = none()
    let changed3 = none()
    if (isWide<W>()) {
      good1 = v128.load(at, 16)
      good2 = v128.load(at, 32)
      good3 = v128.load(at, 48)
      changed1 = v128.and(v128.xor(new1, good1), v128.load(live, 16))
      changed2 = v128.and(v128.xor(new2, good2), v128.load(live, 32))
      changed3 = v128.and(v128.xor(new3, good3), v128.load(live, 48))
      any = v128.or(v128.or(changed0, changed1), v128.or(changed2, changed3))
    }
    if (!v128.any_true(any)) continue

    const watch = watchOf(op)
    const alone = pending == 0 && (allKnown || (op & STEM_BIT) != 0)
    if (watch != 0 || alone) {
      v128.store(plane, changed0, 0)
      if (isWide<W>()) {
        v128.store(plane, changed1, 16)
        v128.store(plane, changed2, 32)
        v128.store(plane, changed3, 48)
      }
      if (watch != 0) {
        seeAt<W>(gate, watch, live, reached)
        if (isEmpty<W>(live)) break
      }
      if (alone) {
        lookUp<W>(gate, allKnown, reached)
        if (isEmpty<W>(plane)) break
        copy<W>(live, plane)
        noted = note<W>(noted, gate, plane)
      } else if (isEmpty<W>(plane)) continue
      changed0 = v128.load(plane, 0)
      if (isWide<W>()) {
        changed1 = v128.load(plane, 16)
        changed2 = v128.load(plane, 32)
        changed3 = v128.load(plane, 48)
      }
    }
    v128.store(at, v128.xor(good0, changed0), 0)
    v128.store(log, good0, 0)
    if (isWide<W>()) {
      v128.store(at, v128.xor(good1, changed1), 16)
      v128.store(at, v128.xor(good2, changed2), 32)
      v128.store(at, v128.xor(good3, changed3), 48)
      v128.store(log, good1, 16)
      v128.store(log, good2, 32)
      v128.store(log, good3, 48)
    }
    store<u32>(log + PLANE_BYTES, gate)
    log += ENTRY_BYTES
    pending += pushFanouts(record, bits, words)
  }
  if (pending > 0) emptyQueue(gate, pending)
  while (log > undo) {
    log -= ENTRY_BYTES
    copy<W>(base + (<usize>load<u32>(log + PLANE_BYTES) << PLANE_SHIFT), log)
  }
  if (!allKnown) keepNotes<W>(noted, reached)
  spend(evaluated)
}
