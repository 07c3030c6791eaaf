import {
  candidates,
  effects,
  gates,
  nTaps,
  observability,
  pinClasses,
  pins,
  regions,
  rowMasks,
  scratch,
  settled,
  sites,
  taps,
  valid,
  values,
  watchMasks,
  watchSlots,
} from './memory'
import { limit } from './block'
import { NO_CLASS, countAll, countLimited, isSettled } from './counting'
import { AND_N, ONE_INPUT, SOURCE, XOR_2, classOf, inversions } from './two-valued-gates'
import { PLANE_BYTES, PLANE_SHIFT, WIDE, clear, copy, isEmpty } from './plane'
import { ALWAYS_WATCHED, propagateFlip, watchOf } from './two-valued-propagate'
import { spend } from './work'

const CANDIDATE_BYTES: i32 = PLANE_BYTES + 16

let lastCandidate: usize = 0
/** False once a region has a class whose result is still open. */
let allSettled: bool = true

/** Writes to `to` the patterns of `seen` in which the net has the value that its fault takes away. */
// @ts-ignore: decorator
@inline
function activate(seen: usize, value: usize, stuck: u32, to: usize): void {
  if (stuck) {
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
}

/** Counts a class of the patterns `seen` in which an effect on its line is observed. */
// @ts-ignore: decorator
@inline
function visitCounting(group: u32, seen: usize, value: usize, stuck: u32): void {
  if (group == NO_CLASS) return
  activate(seen, value, stuck, scratch)
  countAll(group, scratch)
}

/** Keeps a class whose result is open, with the patterns of `seen` in which it flips its region's stem. */
// @ts-ignore: decorator
@inline
function visitOpen(group: u32, seen: usize, value: usize, stuck: u32): void {
  if (group == NO_CLASS || isSettled(group)) return
  allSettled = false
  activate(seen, value, stuck, lastCandidate)
  if (isEmpty(lastCandidate)) return
  store<u32>(lastCandidate + PLANE_BYTES, group)
  lastCandidate += CANDIDATE_BYTES
}

/** Writes to `to` the patterns of `seen` in which the gate's output follows input `pin`. */
function sensitise(op: u32, pin: usize, firstPin: usize, end: usize, seen: usize, to: usize): void {
  copy(to, seen)
  const kind = classOf(op)
  if (kind == ONE_INPUT || kind == XOR_2 || kind > AND_N) return
  const inward = v128.load(inversions(op), 0)
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

/** Walks a region from its stem backwards and counts the detections of all of its lines' faults. */
function walkCounting(start: u32, stem: u32): void {
  for (let net = stem + 1; net > start; ) {
    net--
    const seen = observability + (<usize>net << PLANE_SHIFT)
    const value = values + (<usize>net << PLANE_SHIFT)
    const site = sites + (<usize>net << 4)
    visitCounting(load<u32>(site, 0), seen, value, 0)
    visitCounting(load<u32>(site, 4), seen, value, 1)
    const op = load<u32>(site, 12)
    if (classOf(op) == SOURCE) continue
    const firstPin = pins + (<usize>load<u32>(site, 8) << 2)
    const end = firstPin + (<usize>(op >> 8) << 2)
    let classes = pinClasses + (<usize>load<u32>(site, 8) << 3)
    for (let pin = firstPin; pin < end; pin += 4, classes += 8) {
      const source = load<u32>(pin)
      if (source & 1) {
        sensitise(op, pin, firstPin, end, seen, observability + (<usize>(source >> 1) << PLANE_SHIFT))
      } else if ((load<u32>(classes, 0) & load<u32>(classes, 4)) != NO_CLASS) {
        const to = scratch + PLANE_BYTES
        sensitise(op, pin, firstPin, end, seen, to)
        const at = values + (<usize>(source >> 1) << PLANE_SHIFT)
        visitCounting(load<u32>(classes, 0), to, at, 0)
        visitCounting(load<u32>(classes, 4), to, at, 1)
      }
    }
  }
}

/** Walks a region from its stem backwards and gathers the classes whose results are open. */
function walkOpen(start: u32, stem: u32): void {
  lastCandidate = candidates
  allSettled = true
  copy(effects + (<usize>(stem - start) << PLANE_SHIFT), valid)
  for (let net = stem + 1; net > start; ) {
    net--
    const seen = effects + (<usize>(net - start) << PLANE_SHIFT)
    const value = values + (<usize>net << PLANE_SHIFT)
    const site = sites + (<usize>net << 4)
    visitOpen(load<u32>(site, 0), seen, value, 0)
    visitOpen(load<u32>(site, 4), seen, value, 1)
    const op = load<u32>(site, 12)
    if (classOf(op) == SOURCE) continue
    const firstPin = pins + (<usize>load<u32>(site, 8) << 2)
    const end = firstPin + (<usize>(op >> 8) << 2)
    let classes = pinClasses + (<usize>load<u32>(site, 8) << 3)
    for (let pin = firstPin; pin < end; pin += 4, classes += 8) {
      const source = load<u32>(pin)
      if (source & 1) {
        sensitise(op, pin, firstPin, end, seen, effects + (<usize>((source >> 1) - start) << PLANE_SHIFT))
      } else if ((load<u32>(classes, 0) & load<u32>(classes, 4)) != NO_CLASS) {
        const to = scratch + PLANE_BYTES
        sensitise(op, pin, firstPin, end, seen, to)
        const at = values + (<usize>(source >> 1) << PLANE_SHIFT)
        visitOpen(load<u32>(classes, 0), to, at, 0)
        visitOpen(load<u32>(classes, 4), to, at, 1)
      }
    }
  }
}

/** Writes to `to` the patterns of `asked` in which a flip of the stem is observed. `asked` is used up. */
function observe(stem: u32, asked: usize, to: usize, allKnown: bool): void {
  const watch = watchOf(load<u32>(gates + (<usize>stem << 4)))
  if (watch == ALWAYS_WATCHED) {
    copy(to, asked)
    return
  }
  const record = gates + (<usize>stem << 4)
  if (watch == 0) {
    if (load<u32>(record, 12) == load<u32>(record, 28)) clear(to)
    else propagateFlip(stem, asked, to, allKnown)
    return
  }
  const mask = watchMasks + (<usize>load<u32>(watchSlots + (<usize>stem << 2)) << PLANE_SHIFT)
  const direct = scratch + 2 * PLANE_BYTES
  for (let lane = 0; lane < PLANE_BYTES; lane += 16) {
    v128.store(direct + lane, v128.and(v128.load(asked + lane), v128.load(mask + lane)))
    v128.store(asked + lane, v128.andnot(v128.load(asked + lane), v128.load(mask + lane)))
  }
  if (isEmpty(asked)) clear(to)
  else propagateFlip(stem, asked, to, allKnown)
  for (let lane = 0; lane < PLANE_BYTES; lane += 16) {
    v128.store(to + lane, v128.or(v128.load(to + lane), v128.load(direct + lane)))
  }
}

/** Propagates the effects of the gathered classes from their stem and counts what is observed. */
function settleOpen(stem: u32): void {
  if (lastCandidate == candidates) return
  const asked = scratch + 3 * PLANE_BYTES
  const reached = scratch + 4 * PLANE_BYTES
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

/** Simulates the faults of one region. */
export function simulateRegionTwoValued(region: u32): void {
  const start = load<u32>(regions + (<usize>region << 2))
  const stem = load<u32>(regions + (<usize>region << 2), 4) - 1
  spend(1)
  if (limit == 0) {
    const asked = scratch + 3 * PLANE_BYTES
    copy(asked, valid)
    observe(stem, asked, observability + (<usize>stem << PLANE_SHIFT), true)
    walkCounting(start, stem)
    return
  }
  if (load<u8>(settled + region)) return
  walkOpen(start, stem)
  if (allSettled) store<u8>(settled + region, 1)
  else settleOpen(stem)
}

export function simulateTapsTwoValued(): void {
  const end = taps + (<usize>nTaps << 4)
  const seen = scratch + PLANE_BYTES
  for (let tap = taps; tap < end; tap += 16) {
    const row = load<u32>(tap, 12)
    copy(seen, valid)
    if (row != NO_CLASS) {
      const mask = rowMasks + (<usize>row << PLANE_SHIFT)
      for (let lane = 0; lane < PLANE_BYTES; lane += 16) {
        v128.store(seen + lane, v128.and(v128.load(seen + lane), v128.load(mask + lane)))
      }
    }
    const value = values + (<usize>load<u32>(tap, 0) << PLANE_SHIFT)
    for (let stuck: u32 = 0; stuck < 2; stuck++) {
      const group = load<u32>(tap + (stuck << 2), 4)
      if (group == NO_CLASS || (limit != 0 && isSettled(group))) continue
      activate(seen, value, stuck, scratch)
      if (limit == 0) countAll(group, scratch)
      else if (!isEmpty(scratch)) countLimited(group, scratch)
    }
  }
}
