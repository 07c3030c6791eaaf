import {
  detections,
  easyClasses,
  easyCounts,
  first,
  hardClasses,
  hardPlanes,
  matrix,
  matrixRows,
  rowBytes,
} from './memory'
import { blockStart, limit, rangeStart } from './block'
import { PLANE_SHIFT, copy, count, firstOf, Wide } from './plane'

export const NO_CLASS: u32 = 0xffffffff

/** Counts the patterns of the plane as detections, in results that are this thread's own. */
export function countAll(group: u32, plane: usize): void {
  const found = count<Wide>(plane)
  if (found == 0) return
  const at = detections + (<usize>group << 2)
  const before = load<u32>(at)
  if (before == 0) store<u32>(first + (<usize>group << 2), blockStart + firstOf(plane))
  store<u32>(at, before + found)
  if (matrix != 0) {
    const row = load<u32>(matrixRows + (<usize>group << 2))
    copy<Wide>(matrix + <usize>row * rowBytes + (blockStart >> 3), plane)
  }
  if (hardClasses != 0) report(group, found, plane)
}

/** Detections in one block at which a class is easy: of easy classes the count alone is reported. */
let easyFrom: u32 = 0
let hardCount: u32 = 0
let easyCount: u32 = 0

/** Forgets what was reported of the block before. */
export function beginReport(from: u32): void {
  easyFrom = from
  hardCount = 0
  easyCount = 0
}

export function hardReported(): u32 {
  return hardCount
}

export function easyReported(): u32 {
  return easyCount
}

function report(group: u32, found: u32, plane: usize): void {
  if (found >= easyFrom) {
    store<u32>(easyClasses + (<usize>easyCount << 2), group)
    store<u32>(easyCounts + (<usize>easyCount << 2), found)
    easyCount++
  } else {
    store<u32>(hardClasses + (<usize>hardCount << 2), group)
    copy<Wide>(hardPlanes + (<usize>hardCount << PLANE_SHIFT), plane)
    hardCount++
  }
}

/** Counts the patterns of the plane, of which there must be some, in results that all threads share. */
export function countLimited<W>(group: u32, plane: usize): void {
  const at = first + (<usize>group << 2)
  const pattern = blockStart + firstOf(plane)
  let known = atomic.load<u32>(at)
  while (pattern < known) {
    const seen = atomic.cmpxchg<u32>(at, known, pattern)
    if (seen == known) break
    known = seen
  }
  atomic.add<u32>(detections + (<usize>group << 2), count<W>(plane))
}

/** True where no pattern from this range on can change the result of the class, whatever other threads find. */
// @ts-ignore: decorator
@inline
export function isSettled(group: u32): bool {
  return (
    load<u32>(detections + (<usize>group << 2)) >= limit && load<u32>(first + (<usize>group << 2)) < rangeStart
  )
}
