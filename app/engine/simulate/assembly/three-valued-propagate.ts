import { gates, observability, queue, scratch, summary, undo, watchMasks, watchSlots } from './memory'
import { PLANE_BYTES, PLANE_SHIFT, bytesOf, copy, flip } from './plane'
import { emptyQueue, pushFanouts, takeNext } from './queue'
import { ALWAYS_WATCHED, watchOf } from './two-valued-propagate'
import { spend } from './work'
import { evaluateGate, netValue } from './three-valued-gates'

const UNDO_BYTES: i32 = 2 * PLANE_BYTES + 16

/** What is done to a stem. */
export const FLIP: u32 = 0
export const TO_X: u32 = 1

/** What is asked: detections alone, with effects that one net carries looked up; or both; or what is possible alone. */
export const DETECTIONS: u32 = 0
export const BOTH: u32 = 1
export const POSSIBLE: u32 = 2

/**
 * Propagates a flip of the stem, or an X on it, in the patterns of `live` in which it is known. Writes to `reached` the
 * patterns in which an observed output is known in both machines and differs, and to `possible` those in which it is
 * known in the good machine and X in the faulty one. A pattern is followed until what is asked of it is known; `live` is
 * used up.
 */
export function propagateThreeValued<W>(stem: u32, change: u32, ask: u32, live: usize, reached: usize, possible: usize): void {
  const bits = queue
  const words = summary
  const fresh = scratch + 8 * PLANE_BYTES
  for (let lane = 0; lane < bytesOf<W>(); lane += 16) {
    v128.store(reached + lane, i64x2.splat(0))
    v128.store(possible + lane, i64x2.splat(0))
  }
  let log = undo
  const stemValue = netValue(stem)
  store<u32>(log + 2 * PLANE_BYTES, stem)
  for (let lane = 0; lane < bytesOf<W>(); lane += 16) {
    const one = v128.load(stemValue + lane)
    const zero = v128.load(stemValue + lane + PLANE_BYTES)
    v128.store(log + lane, one)
    v128.store(log + lane + PLANE_BYTES, zero)
    const changed = v128.and(v128.or(one, zero), v128.load(live + lane))
    v128.store(stemValue + lane, v128.xor(one, change == FLIP ? changed : v128.and(one, changed)))
    v128.store(stemValue + lane + PLANE_BYTES, v128.xor(zero, change == FLIP ? changed : v128.and(zero, changed)))
  }
  log += UNDO_BYTES
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
    evaluateGate<W>(record, op, fresh)
    const at = netValue(gate)
    let any = i64x2.splat(0)
    for (let lane = 0; lane < bytesOf<W>(); lane += 16) {
      const alive = v128.load(live + lane)
      const one = v128.and(v128.xor(v128.load(fresh + lane), v128.load(at + lane)), alive)
      const zero = v128.and(v128.xor(v128.load(fresh + lane + PLANE_BYTES), v128.load(at + lane + PLANE_BYTES)), alive)
      v128.store(fresh + lane, one)
      v128.store(fresh + lane + PLANE_BYTES, zero)
      any = v128.or(any, v128.or(one, zero))
    }
    if (!v128.any_true(any)) continue

    const watch = watchOf(op)
    if (watch) {
      const mask = watchMasks + (<usize>load<u32>(watchSlots + (<usize>gate << 2)) << PLANE_SHIFT)
      any = i64x2.splat(0)
      for (let lane = 0; lane < bytesOf<W>(); lane += 16) {
        const one = v128.load(at + lane)
        const zero = v128.load(at + lane + PLANE_BYTES)
        const diffOne = v128.load(fresh + lane)
        const diffZero = v128.load(fresh + lane + PLANE_BYTES)
        let known = v128.or(one, zero)
        if (watch != ALWAYS_WATCHED) known = v128.and(known, v128.load(mask + lane))
        const flipped = v128.and(known, v128.and(diffOne, diffZero))
        const lost = v128.and(known, v128.xor(diffOne, diffZero))
        v128.store(reached + lane, v128.or(v128.load(reached + lane), flipped))
        v128.store(possible + lane, v128.or(v128.load(possible + lane), lost))
        const settled = ask == POSSIBLE ? v128.or(flipped, lost) : flipped
        const alive = v128.andnot(v128.load(live + lane), settled)
        v128.store(live + lane, alive)
        v128.store(fresh + lane, v128.and(diffOne, alive))
        v128.store(fresh + lane + PLANE_BYTES, v128.and(diffZero, alive))
        any = v128.or(any, alive)
      }
      if (!v128.any_true(any)) break
    }
    if (pending == 0 && ask == DETECTIONS) {
      const known = observability + (<usize>gate << PLANE_SHIFT)
      for (let lane = 0; lane < bytesOf<W>(); lane += 16) {
        const flipped = v128.and(v128.load(fresh + lane), v128.load(fresh + lane + PLANE_BYTES))
        v128.store(reached + lane, v128.or(v128.load(reached + lane), v128.and(flipped, v128.load(known + lane))))
      }
      break
    }
    store<u32>(log + 2 * PLANE_BYTES, gate)
    copy<W>(log, at)
    copy<W>(log + PLANE_BYTES, at + PLANE_BYTES)
    flip<W>(at, fresh)
    flip<W>(at + PLANE_BYTES, fresh + PLANE_BYTES)
    log += UNDO_BYTES
    pending += pushFanouts(record, bits, words)
  }
  if (pending > 0) emptyQueue(gate, pending)

  while (log > undo) {
    log -= UNDO_BYTES
    const at = netValue(load<u32>(log + 2 * PLANE_BYTES))
    copy<W>(at, log)
    copy<W>(at + PLANE_BYTES, log + PLANE_BYTES)
  }
  spend(evaluated)
}
