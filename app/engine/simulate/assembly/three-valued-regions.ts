import {
  candidates,
  detections,
  effects,
  gates,
  nTaps,
  observability,
  pinClasses,
  pins,
  possibly,
  regions,
  rowMasks,
  scratch,
  settled,
  sites,
  taps,
  valid,
  watchMasks,
  watchSlots,
} from './memory'
import { limit, narrow } from './block'
import { NO_CLASS, countAll, countLimited, isSettled } from './counting'
import { AND_N, ONE_INPUT, SOURCE, XOR_2, classOf } from './two-valued-gates'
import { PLANE_BYTES, PLANE_SHIFT, add, bytesOf, clear, copy, isEmpty, keep, none, Narrow, Wide } from './plane'
import { netValue, planeOf } from './three-valued-gates'
import { ALWAYS_WATCHED, watchOf } from './two-valued-propagate'
import { spend } from './work'
import { BOTH, DETECTIONS, FLIP, POSSIBLE, TO_X, propagateThreeValued } from './three-valued-propagate'

const CANDIDATE_BYTES: i32 = 2 * PLANE_BYTES + 16

let lastCandidate: usize = 0

/** False once a region has a class whose result is still open. */
let allSettled: bool = true

/**
 * In which patterns a flip of the net flips its region's stem, and then in which it turns the stem to X: two planes for
 * each net of the region at hand.
 */
// @ts-ignore: decorator
@inline
function effectsAt(slot: u32, start: u32): usize {
  return effects + (<usize>(slot - start) << (PLANE_SHIFT + 1))
}

// @ts-ignore: decorator
@inline
function isOpen(group: u32): bool {
  return load<u8>(possibly + group) == 0 && load<u32>(detections + (<usize>group << 2)) == 0
}

/** Counts a class of the patterns `seen` in which its line has the value that the fault takes away. */
function visitCounting(group: u32, seen: usize, value: usize): void {
  if (group == NO_CLASS) return
  for (let lane = 0; lane < PLANE_BYTES; lane += 16) {
    v128.store(scratch + lane, v128.and(v128.load(seen + lane), v128.load(value + lane)))
  }
  countAll(group, scratch)
}

/** Keeps a class whose result is still open, with the patterns in which it flips its stem or turns it to X. */
function visitOpen<W>(group: u32, effect: usize, value: usize): void {
  if (group == NO_CLASS) return
  if (limit == 0 ? !isOpen(group) : isSettled(group)) return
  allSettled = false
  const to = lastCandidate
  let any = i64x2.splat(0)
  for (let lane = 0; lane < bytesOf<W>(); lane += 16) {
    const active = v128.load(value + lane)
    const flips = v128.and(v128.load(effect + lane), active)
    const loses = v128.and(v128.load(effect + lane + PLANE_BYTES), active)
    v128.store(to + lane, flips)
    v128.store(to + lane + PLANE_BYTES, loses)
    any = v128.or(any, v128.or(flips, loses))
  }
  if (!v128.any_true(any)) return
  store<u32>(to + 2 * PLANE_BYTES, group)
  lastCandidate = to + CANDIDATE_BYTES
}

/** Writes to `to` the patterns of `seen` in which a flip at the pin flips the gate. */
function sensitiseFlip<W>(op: u32, pin: usize, firstPin: usize, end: usize, seen: usize, to: usize): void {
  copy<W>(to, seen)
  const kind = classOf(op)
  if (kind == ONE_INPUT) return
  const isXor = kind == XOR_2 || kind > AND_N
  const truth = planeOf(op & 1)
  for (let other = firstPin; other < end; other += 4) {
    if (other == pin) continue
    const at = netValue(load<u32>(other) >> 1)
    for (let lane = 0; lane < bytesOf<W>(); lane += 16) {
      let passes = v128.load(at + lane + truth)
      if (isXor) passes = v128.or(passes, v128.load(at + lane + (truth ^ PLANE_BYTES)))
      v128.store(to + lane, v128.and(v128.load(to + lane), passes))
    }
  }
}

/**
 * Writes to `to` the two planes of effects of a flip at the pin, given those of a flip of the gate's output. Where other
 * inputs are X and none decides the output, a flip away from the deciding value turns the output to X; and an X on
 * the output turns the stem to X wherever a flip has any effect there.
 */
function sensitiseBoth<W>(op: u32, pin: usize, firstPin: usize, end: usize, effect: usize, to: usize): void {
  const kind = classOf(op)
  const isXor = kind == XOR_2 || kind > AND_N
  const truth = planeOf(op & 1)
  const own = netValue(load<u32>(pin) >> 1)
  for (let lane = 0; lane < bytesOf<W>(); lane += 16) {
    let passes = i64x2.splat(-1)
    let undecided = i64x2.splat(-1)
    if (kind != ONE_INPUT) {
      for (let other = firstPin; other < end; other += 4) {
        if (other == pin) continue
        const at = netValue(load<u32>(other) >> 1) + lane
        const open = v128.load(at + truth)
        const decides = v128.load(at + (truth ^ PLANE_BYTES))
        passes = v128.and(passes, isXor ? v128.or(open, decides) : open)
        undecided = v128.andnot(undecided, decides)
      }
    }
    const flips = v128.load(effect + lane)
    const loses = v128.load(effect + lane + PLANE_BYTES)
    v128.store(to + lane, v128.and(flips, passes))
    let lost = v128.and(loses, passes)
    if (!isXor) {
      const toX = v128.and(v128.andnot(undecided, passes), v128.load(own + lane + (truth ^ PLANE_BYTES)))
      lost = v128.or(lost, v128.and(v128.or(flips, loses), toX))
    }
    v128.store(to + lane + PLANE_BYTES, lost)
  }
}

/** Walks a region from its stem backwards and counts the detections of all of its lines' faults. */
function walkCounting(start: u32, stem: u32): void {
  for (let net = stem + 1; net > start; ) {
    net--
    const seen = observability + (<usize>net << PLANE_SHIFT)
    const site = sites + (<usize>net << 4)
    visitCounting(load<u32>(site, 0), seen, netValue(net))
    visitCounting(load<u32>(site, 4), seen, netValue(net) + PLANE_BYTES)
    const op = load<u32>(site, 12)
    if (classOf(op) == SOURCE) continue
    const firstPin = pins + (<usize>load<u32>(site, 8) << 2)
    const end = firstPin + (<usize>(op >> 8) << 2)
    let classes = pinClasses + (<usize>load<u32>(site, 8) << 3)
    for (let pin = firstPin; pin < end; pin += 4, classes += 8) {
      const source = load<u32>(pin)
      if (source & 1) {
        sensitiseFlip<Wide>(op, pin, firstPin, end, seen, observability + (<usize>(source >> 1) << PLANE_SHIFT))
      } else if ((load<u32>(classes, 0) & load<u32>(classes, 4)) != NO_CLASS) {
        const to = scratch + PLANE_BYTES
        sensitiseFlip<Wide>(op, pin, firstPin, end, seen, to)
        visitCounting(load<u32>(classes, 0), to, netValue(source >> 1))
        visitCounting(load<u32>(classes, 4), to, netValue(source >> 1) + PLANE_BYTES)
      }
    }
  }
}

/** Walks a region from its stem backwards and gathers the classes whose results are open. */
function walkOpen<W>(start: u32, stem: u32): void {
  copy<W>(effectsAt(stem, start), valid)
  clear<W>(effectsAt(stem, start) + PLANE_BYTES)
  lastCandidate = candidates
  allSettled = true
  for (let net = stem + 1; net > start; ) {
    net--
    const effect = effectsAt(net, start)
    const site = sites + (<usize>net << 4)
    visitOpen<W>(load<u32>(site, 0), effect, netValue(net))
    visitOpen<W>(load<u32>(site, 4), effect, netValue(net) + PLANE_BYTES)
    const op = load<u32>(site, 12)
    if (classOf(op) == SOURCE) continue
    const firstPin = pins + (<usize>load<u32>(site, 8) << 2)
    const end = firstPin + (<usize>(op >> 8) << 2)
    let classes = pinClasses + (<usize>load<u32>(site, 8) << 3)
    for (let pin = firstPin; pin < end; pin += 4, classes += 8) {
      const source = load<u32>(pin)
      if (source & 1) {
        sensitiseBoth<W>(op, pin, firstPin, end, effect, effectsAt(source >> 1, start))
      } else if ((load<u32>(classes, 0) & load<u32>(classes, 4)) != NO_CLASS) {
        const to = scratch + PLANE_BYTES
        sensitiseBoth<W>(op, pin, firstPin, end, effect, to)
        visitOpen<W>(load<u32>(classes, 0), to, netValue(source >> 1))
        visitOpen<W>(load<u32>(classes, 4), to, netValue(source >> 1) + PLANE_BYTES)
      }
    }
  }
}

/** As propagateThreeValued, with the stem's own observation taken into account. `asked` is used up. */
function observe<W>(stem: u32, change: u32, ask: u32, asked: usize, reached: usize, possible: usize): void {
  const record = gates + (<usize>stem << 4)
  const watch = watchOf(load<u32>(record))
  if (watch == 0) {
    if (load<u32>(record, 12) != load<u32>(record, 28)) {
      propagateThreeValued<W>(stem, change, ask, asked, reached, possible)
    } else {
      clear<W>(reached)
      clear<W>(possible)
    }
    return
  }
  const direct = scratch + 10 * PLANE_BYTES
  const mask = watch != ALWAYS_WATCHED ? watchMasks + (<usize>load<u32>(watchSlots + (<usize>stem << 2)) << PLANE_SHIFT) : valid
  copy<W>(direct, asked)
  keep<W>(direct, mask, none())
  keep<W>(asked, mask, i64x2.splat(-1))
  if (watch == ALWAYS_WATCHED || isEmpty<W>(asked)) {
    clear<W>(reached)
    clear<W>(possible)
  } else propagateThreeValued<W>(stem, change, ask, asked, reached, possible)
  const to = change == FLIP ? reached : possible
  add<W>(to, direct)
}

/** Propagates what the gathered classes do to their stem and writes down what comes of it. */
function settleOpen<W>(stem: u32): void {
  if (lastCandidate == candidates) return
  const flips = scratch + 3 * PLANE_BYTES
  const losses = scratch + 4 * PLANE_BYTES
  const reached = scratch + 5 * PLANE_BYTES
  const flipPossible = scratch + 6 * PLANE_BYTES
  const lossPossible = scratch + 7 * PLANE_BYTES
  clear<W>(flips)
  clear<W>(losses)
  for (let at = candidates; at < lastCandidate; at += CANDIDATE_BYTES) {
    add<W>(flips, at)
    if (load<u8>(possibly + load<u32>(at + 2 * PLANE_BYTES)) == 0) add<W>(losses, at + PLANE_BYTES)
  }
  if (isEmpty<W>(losses)) clear<W>(lossPossible)
  else observe<W>(stem, TO_X, POSSIBLE, losses, reached, lossPossible)
  if (isEmpty<W>(flips)) {
    clear<W>(reached)
    clear<W>(flipPossible)
  } else observe<W>(stem, FLIP, limit == 0 ? POSSIBLE : BOTH, flips, reached, flipPossible)

  for (let at = candidates; at < lastCandidate; at += CANDIDATE_BYTES) {
    const group = load<u32>(at + 2 * PLANE_BYTES)
    let maybe = none()
    for (let lane = 0; lane < bytesOf<W>(); lane += 16) {
      maybe = v128.or(maybe, v128.and(v128.load(at + lane), v128.load(flipPossible + lane)))
      maybe = v128.or(maybe, v128.and(v128.load(at + lane + PLANE_BYTES), v128.load(lossPossible + lane)))
    }
    if (v128.any_true(maybe)) store<u8>(possibly + group, 1)
    keep<W>(at, reached, none())
    if (limit != 0 && !isEmpty<W>(at)) countLimited<W>(group, at)
  }
}

function simulateOpen<W>(region: u32, start: u32, stem: u32): void {
  walkOpen<W>(start, stem)
  if (allSettled) store<u8>(settled + region, 1)
  else settleOpen<W>(stem)
}

/** Simulates the faults of one region. */
export function simulateRegionThreeValued(region: u32): void {
  const start = load<u32>(regions + (<usize>region << 2))
  const stem = load<u32>(regions + (<usize>region << 2), 4) - 1
  spend(1)
  if (limit == 0) {
    const asked = scratch + 3 * PLANE_BYTES
    const seen = observability + (<usize>stem << PLANE_SHIFT)
    copy<Wide>(asked, valid)
    observe<Wide>(stem, FLIP, DETECTIONS, asked, seen, scratch + 7 * PLANE_BYTES)
    walkCounting(start, stem)
  }
  if (load<u8>(settled + region)) return
  if (narrow) simulateOpen<Narrow>(region, start, stem)
  else simulateOpen<Wide>(region, start, stem)
}

export function simulateTapsThreeValued(): void {
  const end = taps + (<usize>nTaps << 4)
  const seen = scratch + PLANE_BYTES
  for (let tap = taps; tap < end; tap += 16) {
    const row = load<u32>(tap, 12)
    copy<Wide>(seen, valid)
    if (row != NO_CLASS) keep<Wide>(seen, rowMasks + (<usize>row << PLANE_SHIFT), none())
    for (let stuck: u32 = 0; stuck < 2; stuck++) {
      const group = load<u32>(tap + (stuck << 2), 4)
      if (group == NO_CLASS || (limit != 0 && isSettled(group))) continue
      copy<Wide>(scratch, netValue(load<u32>(tap, 0)) + (<usize>stuck << PLANE_SHIFT))
      keep<Wide>(scratch, seen, none())
      if (limit == 0) countAll(group, scratch)
      else if (!isEmpty<Wide>(scratch)) countLimited<Wide>(group, scratch)
    }
  }
}
