import {
  constants,
  counted,
  inputSlots,
  nConstants,
  nInputRows,
  nResponseRows,
  nWatches,
  patternObserved,
  patternUnknowns,
  patternValues,
  rowBytes,
  rowMasks,
  unknownDrivers,
  valid,
  values,
  watchMasks,
  watchRowStart,
  watchRows,
} from './memory'
import { PLANE_BYTES, PLANE_SHIFT, add, clear, copy, none, Wide } from './plane'
import { evaluateGoodTwoValued } from './two-valued-gates'
import { evaluateGoodThreeValued } from './three-valued-gates'

const NO_SLOT: u32 = 0xffffffff

/** Detections at which a class is no longer simulated; 0: all are counted. */
export let limit: u32 = 0
/** The number of the block's first pattern, and of the first pattern of the range in use. */
export let blockStart: u32 = 0
export let rangeStart: u32 = 0
/** Counts ranges in use, so that what was found out in one is not mistaken for the next one's. */
export let pass: u32 = 0
/** True where the block has an X. */
export let threeValued: bool = false
/** True where the range in use lies within the first 128 patterns of the block. */
export let narrow: bool = false

let column: usize = 0

/** Loads a block of patterns. Values of gates are those of an earlier block until they are evaluated. */
export function loadBlock(block: u32, detectionLimit: u32): void {
  limit = detectionLimit
  blockStart = block * ((<u32>PLANE_BYTES) << 3)
  column = <usize>block << PLANE_SHIFT
  threeValued = unknownDrivers != 0 || hasUnknown()
  loadConstants()
  loadInputs()
  if (patternObserved != 0) loadMasks()
}

/** Computes the fault-free values of nets `from` to `to` − 1; those of all earlier ones must have been computed. */
export function evaluateGood(from: u32, to: u32): void {
  if (threeValued) evaluateGoodThreeValued(from, to)
  else evaluateGoodTwoValued(from, to)
}

/** Restricts what is simulated to patterns `from` to `to` − 1 of the block. */
export function usePatterns(from: u32, to: u32): void {
  rangeStart = blockStart + from
  pass++
  narrow = to <= 128
  for (let word: u32 = 0; word < <u32>PLANE_BYTES >> 3; word++) {
    const start = <i32>from - <i32>(word << 6)
    const end = <i32>to - <i32>(word << 6)
    let bits: u64 = end >= 64 ? ~(<u64>0) : end <= 0 ? 0 : ((<u64>1) << end) - 1
    if (start > 0) bits = start >= 64 ? 0 : bits & ~(((<u64>1) << start) - 1)
    store<u64>(valid + (word << 3), bits & load<u64>(counted + column + (word << 3)))
  }
}

function hasUnknown(): bool {
  if (patternUnknowns == 0) return false
  let any = none()
  let row = patternUnknowns + column
  for (let at: u32 = 0; at < nInputRows; at++, row += rowBytes) {
    for (let lane = 0; lane < PLANE_BYTES; lane += 16) any = v128.or(any, v128.load(row + lane))
  }
  return v128.any_true(any)
}

function loadConstants(): void {
  for (let at: u32 = 0; at < nConstants; at++) {
    const entry = constants + (<usize>at << 3)
    const one = i64x2.splat(-<i64>(load<u32>(entry, 4) & 1))
    const zero = i64x2.splat(-<i64>((load<u32>(entry, 4) >> 1) & 1))
    const to = values + (<usize>load<u32>(entry) << (PLANE_SHIFT + i32(threeValued)))
    for (let lane = 0; lane < PLANE_BYTES; lane += 16) {
      v128.store(to + lane, one)
      if (threeValued) v128.store(to + PLANE_BYTES + lane, zero)
    }
  }
}

function loadInputs(): void {
  let row = patternValues + column
  let unknownRow = patternUnknowns + column
  for (let at: u32 = 0; at < nInputRows; at++, row += rowBytes, unknownRow += rowBytes) {
    const slot = load<u32>(inputSlots + (<usize>at << 2))
    if (slot == NO_SLOT) continue
    if (!threeValued) {
      copy<Wide>(values + (<usize>slot << PLANE_SHIFT), row)
      continue
    }
    const to = values + (<usize>slot << (PLANE_SHIFT + 1))
    for (let lane = 0; lane < PLANE_BYTES; lane += 16) {
      const value = v128.load(row + lane)
      const unknown = patternUnknowns == 0 ? none() : v128.load(unknownRow + lane)
      v128.store(to + lane, v128.andnot(value, unknown))
      v128.store(to + PLANE_BYTES + lane, v128.not(v128.or(value, unknown)))
    }
  }
}

/** Loads what each response row observes in this block, and gathers it for nets that several rows observe. */
function loadMasks(): void {
  let row = patternObserved + column
  for (let at: u32 = 0; at < nResponseRows; at++, row += rowBytes) copy<Wide>(rowMasks + (<usize>at << PLANE_SHIFT), row)
  for (let watch: u32 = 0; watch < nWatches; watch++) {
    const to = watchMasks + (<usize>watch << PLANE_SHIFT)
    clear<Wide>(to)
    const end = load<u32>(watchRowStart + (<usize>watch << 2), 4)
    for (let at = load<u32>(watchRowStart + (<usize>watch << 2)); at < end; at++) {
      const mask = rowMasks + (<usize>load<u32>(watchRows + (<usize>at << 2)) << PLANE_SHIFT)
      add<Wide>(to, mask)
    }
  }
}
