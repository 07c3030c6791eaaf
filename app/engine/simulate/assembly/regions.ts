import {
  candidates,
  gates,
  masks,
  nTaps,
  observability,
  pinClasses,
  pins,
  regions,
  rowMasks,
  scratch,
  sites,
  taps,
  valid,
  values,
  watched,
  watchMasks,
  watchSlots,
} from './memory'
import { NO_CLASS, countAll, countLimited, isSettled, limit } from './counting'
import { AND_N, ONE_INPUT, SOURCE, XOR_2 } from './good'
import { PLANE_BYTES, PLANE_SHIFT, WIDE, clear, copy, isEmpty } from './plane'
import { propagateFlip } from './propagate'

const CANDIDATE_BYTES: i32 = PLANE_BYTES + 16

let lastCandidate: usize = 0

/** Takes the patterns `seen` & value (or & ~value) as those in which a fault of this class shows at its region's stem. */
// @ts-ignore: decorator
@inline
function visit(group: u32, seen: usize, value: usize, inverted: bool): void {
  if (group == NO_CLASS) return
  if (limit != 0 && isSettled(group)) return
  const to = limit != 0 ? lastCandidate : scratch
  if (inverted) {
    v128.store(to, v128.andnot(v128.load(seen, 0), v128.load(value, 0)), 0)
    v128.store(to, v128.andnot(v128.load(seen, 16), v128.load(value, 16)), 16)
    if (WIDE) {
      v128.store(to, v128.andnot(v128.load(seen, 32), v128.load(value, 32)), 32)
      v128.store(to, v128.andnot(v128.load(seen, 48), v128.load(value, 48)), 48)
    }
  } else {
    v128.store(to, v128.and(v128.load(seen, 0), v128.load(value, 0)), 0)
    v128.store(to, v128.and(v128.load(seen, 16), v128.load(value, 16)), 16)
    if (WIDE) {
      v128.store(to, v128.and(v128.load(seen, 32), v128.load(value, 32)), 32)
      v128.store(to, v128.and(v128.load(seen, 48), v128.load(value, 48)), 48)
    }
  }
  if (limit == 0) countAll(group, to)
  else if (!isEmpty(to)) {
    store<u32>(to + PLANE_BYTES, group)
    lastCandidate = to + CANDIDATE_BYTES
  }
}

/** Writes to `to` the patterns of `seen` in which the gate's output follows input `pin`. */
function sensitise(record: usize, kind: u32, pin: usize, firstPin: usize, end: usize, seen: usize, to: usize): void {
  copy(to, seen)
  if (kind == ONE_INPUT || kind == XOR_2 || kind > AND_N) return
  const inversions = masks + (<usize>(load<u32>(record) & 3) << 5)
  const inward = v128.load(inversions, 0)
  for (let other = firstPin; other < end; other += 4) {
    if (other == pin) continue
    const at = values + (<usize>(load<u32>(other) >> 1) << PLANE_SHIFT)
    v128.store(to, v128.and(v128.load(to, 0), v128.xor(v128.load(at, 0), inward)), 0)
    v128.store(to, v128.and(v128.load(to, 16), v128.xor(v128.load(at, 16), inward)), 16)
    if (WIDE) {
      v128.store(to, v128.and(v128.load(to, 32), v128.xor(v128.load(at, 32), inward)), 32)
      v128.store(to, v128.and(v128.load(to, 48), v128.xor(v128.load(at, 48), inward)), 48)
    }
  }
}

/** Walks a fan-out-free region from its stem backwards, visiting the faults of all of its lines. */
function walk(start: u32, stem: u32): void {
  for (let net = stem + 1; net > start; ) {
    net--
    const seen = observability + (<usize>net << PLANE_SHIFT)
    const value = values + (<usize>net << PLANE_SHIFT)
    const site = sites + (<usize>net << 4)
    visit(load<u32>(site, 0), seen, value, false)
    visit(load<u32>(site, 4), seen, value, true)
    const record = gates + (<usize>net << 4)
    const kind = load<u32>(record) >> 2
    if (kind == SOURCE) continue
    const firstPin = pins + (<usize>load<u32>(site, 8) << 2)
    const end = firstPin + (<usize>load<u32>(site, 12) << 2)
    let classes = pinClasses + (<usize>load<u32>(site, 8) << 3)
    for (let pin = firstPin; pin < end; pin += 4, classes += 8) {
      const source = load<u32>(pin)
      if (source & 1) {
        sensitise(record, kind, pin, firstPin, end, seen, observability + (<usize>(source >> 1) << PLANE_SHIFT))
      } else if ((load<u32>(classes, 0) & load<u32>(classes, 4)) != NO_CLASS) {
        const to = scratch + PLANE_BYTES
        sensitise(record, kind, pin, firstPin, end, seen, to)
        const at = values + (<usize>(source >> 1) << PLANE_SHIFT)
        visit(load<u32>(classes, 0), to, at, false)
        visit(load<u32>(classes, 4), to, at, true)
      }
    }
  }
}

/** Writes to `to` the patterns of `asked` in which a flip of the stem is observed. `asked` is used up. */
function observe(stem: u32, asked: usize, to: usize, lookUp: bool): void {
  const watch = load<u8>(watched + stem)
  if (watch == 1) {
    copy(to, asked)
    return
  }
  const record = gates + (<usize>stem << 4)
  if (watch == 0 && load<u32>(record, 12) == load<u32>(record, 28)) {
    clear(to)
    return
  }
  if (watch == 0) {
    propagateFlip(stem, asked, to, lookUp)
    return
  }
  const mask = watchMasks + (<usize>load<u32>(watchSlots + (<usize>stem << 2)) << PLANE_SHIFT)
  const direct = scratch + 2 * PLANE_BYTES
  for (let at = 0; at < PLANE_BYTES; at += 16) {
    v128.store(direct + at, v128.and(v128.load(asked + at), v128.load(mask + at)))
    v128.store(asked + at, v128.andnot(v128.load(asked + at), v128.load(mask + at)))
  }
  if (isEmpty(asked)) clear(to)
  else propagateFlip(stem, asked, to, lookUp)
  for (let at = 0; at < PLANE_BYTES; at += 16) {
    v128.store(to + at, v128.or(v128.load(to + at), v128.load(direct + at)))
  }
}

/** Simulates the faults of regions `from` − 1 down to `to`; every later region must have been done in this block. */
export function simulateRegions(from: u32, to: u32): void {
  const asked = scratch + 3 * PLANE_BYTES
  const reached = scratch + 4 * PLANE_BYTES
  for (let region = from; region > to; ) {
    region--
    const start = load<u32>(regions + (<usize>region << 2))
    const stem = load<u32>(regions + (<usize>region << 2), 4) - 1
    const seen = observability + (<usize>stem << PLANE_SHIFT)
    if (limit == 0) {
      copy(asked, valid)
      observe(stem, asked, seen, true)
      walk(start, stem)
      continue
    }
    copy(seen, valid)
    lastCandidate = candidates
    walk(start, stem)
    if (lastCandidate == candidates) continue
    clear(asked)
    for (let at = candidates; at < lastCandidate; at += CANDIDATE_BYTES) {
      for (let lane = 0; lane < PLANE_BYTES; lane += 16) {
        v128.store(asked + lane, v128.or(v128.load(asked + lane), v128.load(at + lane)))
      }
    }
    observe(stem, asked, reached, false)
    for (let at = candidates; at < lastCandidate; at += CANDIDATE_BYTES) {
      for (let lane = 0; lane < PLANE_BYTES; lane += 16) {
        v128.store(at + lane, v128.and(v128.load(at + lane), v128.load(reached + lane)))
      }
      if (!isEmpty(at)) countLimited(load<u32>(at + PLANE_BYTES), at)
    }
  }
}

/** Counts the faults on flip-flops' data pins and output taps, which one response row alone observes. */
export function simulateTaps(): void {
  const end = taps + (<usize>nTaps << 4)
  for (let tap = taps; tap < end; tap += 16) {
    const row = load<u32>(tap, 12)
    const seen = row == NO_CLASS ? valid : rowMasks + (<usize>row << PLANE_SHIFT)
    const value = values + (<usize>load<u32>(tap, 0) << PLANE_SHIFT)
    lastCandidate = candidates
    visit(load<u32>(tap, 4), seen, value, false)
    visit(load<u32>(tap, 8), seen, value, true)
    for (let at = candidates; at < lastCandidate; at += CANDIDATE_BYTES) {
      countLimited(load<u32>(at + PLANE_BYTES), at)
    }
  }
}
