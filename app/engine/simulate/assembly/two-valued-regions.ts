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
import { limit, narrow } from './block'
import { NO_CLASS, countAll, countLimited, isSettled } from './counting'
import { AND_N, ONE_INPUT, SOURCE, XOR_2, classOf, inversions } from './two-valued-gates'
import { PLANE_BYTES, PLANE_SHIFT, add, clear, copy, isEmpty, isWide, keep, none, Narrow, Wide } from './plane'
import { ALWAYS_WATCHED, propagateFlip, watchOf } from './two-valued-propagate'
import { spend } from './work'

const CANDIDATE_BYTES: i32 = PLANE_BYTES + 16

let lastCandidate: usize = 0
/** False once a region has a class whose result is still open. */
let allSettled: bool = true

/** Writes to `to` the patterns of `seen` in which the net has the value that its fault takes away. */
// @ts-ignore: decorator
@inline
function activate<W>(seen: usize, value: usize, stuck: u32, to: usize): void {
  const inverts = stuck ? i64x2.splat(-1) : none()
  v128.store(to, v128.and(v128.load(seen, 0), v128.xor(v128.load(value, 0), inverts)), 0)
  if (isWide<W>()) {
    v128.store(to, v128.and(v128.load(seen, 16), v128.xor(v128.load(value, 16), inverts)), 16)
    v128.store(to, v128.and(v128.load(seen, 32), v128.xor(v128.load(value, 32), inverts)), 32)
    v128.store(to, v128.and(v128.load(seen, 48), v128.xor(v128.load(value, 48), inverts)), 48)
  }
}

/** Counts a class of the patterns `seen` in which an effect on its line is observed. */
// @ts-ignore: decorator
@inline
function visitCounting(group: u32, seen: usize, value: usize, stuck: u32): void {
  if (group == NO_CLASS) return
  activate<Wide>(seen, value, stuck, scratch)
  countAll(group, scratch)
}

/** Keeps a class whose result is open, with the patterns of `seen` in which it flips its region's stem. */
// @ts-ignore: decorator
@inline
function visitOpen<W>(group: u32, seen: usize, value: usize, stuck: u32): void {
  if (group == NO_CLASS || isSettled(group)) return
  allSettled = false
  activate<W>(seen, value, stuck, lastCandidate)
  if (isEmpty<W>(lastCandidate)) return
  store<u32>(lastCandidate + PLANE_BYTES, group)
  lastCandidate += CANDIDATE_BYTES
}

/** Writes to `to` the patterns of `seen` in which the gate's output follows input `pin`. */
function sensitise<W>(op: u32, pin: usize, firstPin: usize, end: usize, seen: usize, to: usize): void {
  copy<W>(to, seen)
  const kind = classOf(op)
  if (kind == ONE_INPUT || kind == XOR_2 || kind > AND_N) return
  const inverts = v128.load(inversions(op), 0)
  for (let other = firstPin; other < end; other += 4) {
    if (other != pin) keep<W>(to, values + (<usize>(load<u32>(other) >> 1) << PLANE_SHIFT), inverts)
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
        sensitise<Wide>(op, pin, firstPin, end, seen, observability + (<usize>(source >> 1) << PLANE_SHIFT))
      } else if ((load<u32>(classes, 0) & load<u32>(classes, 4)) != NO_CLASS) {
        const to = scratch + PLANE_BYTES
        sensitise<Wide>(op, pin, firstPin, end, seen, to)
        const at = values + (<usize>(source >> 1) << PLANE_SHIFT)
        visitCounting(load<u32>(classes, 0), to, at, 0)
        visitCounting(load<u32>(classes, 4), to, at, 1)
      }
    }
  }
}

/** Walks a region from its stem backwards and gathers the classes whose results are open. */
function walkOpen<W>(start: u32, stem: u32): void {
  lastCandidate = candidates
  allSettled = true
  copy<W>(effects + (<usize>(stem - start) << PLANE_SHIFT), valid)
  for (let net = stem + 1; net > start; ) {
    net--
    const seen = effects + (<usize>(net - start) << PLANE_SHIFT)
    const value = values + (<usize>net << PLANE_SHIFT)
    const site = sites + (<usize>net << 4)
    visitOpen<W>(load<u32>(site, 0), seen, value, 0)
    visitOpen<W>(load<u32>(site, 4), seen, value, 1)
    const op = load<u32>(site, 12)
    if (classOf(op) == SOURCE) continue
    const firstPin = pins + (<usize>load<u32>(site, 8) << 2)
    const end = firstPin + (<usize>(op >> 8) << 2)
    let classes = pinClasses + (<usize>load<u32>(site, 8) << 3)
    for (let pin = firstPin; pin < end; pin += 4, classes += 8) {
      const source = load<u32>(pin)
      if (source & 1) {
        sensitise<W>(op, pin, firstPin, end, seen, effects + (<usize>((source >> 1) - start) << PLANE_SHIFT))
      } else if ((load<u32>(classes, 0) & load<u32>(classes, 4)) != NO_CLASS) {
        const to = scratch + PLANE_BYTES
        sensitise<W>(op, pin, firstPin, end, seen, to)
        const at = values + (<usize>(source >> 1) << PLANE_SHIFT)
        visitOpen<W>(load<u32>(classes, 0), to, at, 0)
        visitOpen<W>(load<u32>(classes, 4), to, at, 1)
      }
    }
  }
}

/** Writes to `to` the patterns of `asked` in which a flip of the stem is observed. `asked` is used up. */
function observe<W>(stem: u32, asked: usize, to: usize, allKnown: bool): void {
  const record = gates + (<usize>stem << 4)
  const watch = watchOf(load<u32>(record))
  if (watch == ALWAYS_WATCHED) {
    copy<W>(to, asked)
    return
  }
  if (watch == 0) {
    if (load<u32>(record, 12) == load<u32>(record, 28)) clear<W>(to)
    else propagateFlip<W>(stem, asked, to, allKnown)
    return
  }
  const mask = watchMasks + (<usize>load<u32>(watchSlots + (<usize>stem << 2)) << PLANE_SHIFT)
  const direct = scratch + 2 * PLANE_BYTES
  copy<W>(direct, asked)
  keep<W>(direct, mask, none())
  keep<W>(asked, mask, i64x2.splat(-1))
  if (isEmpty<W>(asked)) clear<W>(to)
  else propagateFlip<W>(stem, asked, to, allKnown)
  add<W>(to, direct)
}

/** Propagates the effects of the gathered classes from their stem and counts what is observed. */
function settleOpen<W>(stem: u32): void {
  if (lastCandidate == candidates) return
  const asked = scratch + 3 * PLANE_BYTES
  const reached = scratch + 4 * PLANE_BYTES
  clear<W>(asked)
  for (let at = candidates; at < lastCandidate; at += CANDIDATE_BYTES) add<W>(asked, at)
  observe<W>(stem, asked, reached, false)
  for (let at = candidates; at < lastCandidate; at += CANDIDATE_BYTES) {
    keep<W>(at, reached, none())
    if (!isEmpty<W>(at)) countLimited<W>(load<u32>(at + PLANE_BYTES), at)
  }
}

function simulateOpen<W>(region: u32, start: u32, stem: u32): void {
  walkOpen<W>(start, stem)
  if (allSettled) store<u8>(settled + region, 1)
  else settleOpen<W>(stem)
}

/** Simulates the faults of one region. */
export function simulateRegionTwoValued(region: u32): void {
  const start = load<u32>(regions + (<usize>region << 2))
  const stem = load<u32>(regions + (<usize>region << 2), 4) - 1
  spend(1)
  if (limit == 0) {
    const asked = scratch + 3 * PLANE_BYTES
    copy<Wide>(asked, valid)
    observe<Wide>(stem, asked, observability + (<usize>stem << PLANE_SHIFT), true)
    walkCounting(start, stem)
  } else if (!load<u8>(settled + region)) {
    if (narrow) simulateOpen<Narrow>(region, start, stem)
    else simulateOpen<Wide>(region, start, stem)
  }
}

export function simulateTapsTwoValued(): void {
  const end = taps + (<usize>nTaps << 4)
  const seen = scratch + PLANE_BYTES
  for (let tap = taps; tap < end; tap += 16) {
    const row = load<u32>(tap, 12)
    copy<Wide>(seen, valid)
    if (row != NO_CLASS) keep<Wide>(seen, rowMasks + (<usize>row << PLANE_SHIFT), none())
    const value = values + (<usize>load<u32>(tap, 0) << PLANE_SHIFT)
    for (let stuck: u32 = 0; stuck < 2; stuck++) {
      const group = load<u32>(tap + (stuck << 2), 4)
      if (group == NO_CLASS || (limit != 0 && isSettled(group))) continue
      activate<Wide>(seen, value, stuck, scratch)
      if (limit == 0) countAll(group, scratch)
      else if (!isEmpty<Wide>(scratch)) countLimited<Wide>(group, scratch)
    }
  }
}
