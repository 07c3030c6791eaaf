import { detections, first, matrix, rowBytes } from './memory'
import { blockStart, limit, rangeStart } from './block'
import { copy, count, firstOf, Wide } from './plane'

export const NO_CLASS: u32 = 0xffffffff

/** Counts the patterns of the plane as detections, in results that are this thread's own. */
export function countAll(group: u32, plane: usize): void {
  const found = count<Wide>(plane)
  if (found == 0) return
  const at = detections + (<usize>group << 2)
  const before = load<u32>(at)
  if (before == 0) store<u32>(first + (<usize>group << 2), blockStart + firstOf(plane))
  store<u32>(at, before + found)
  if (matrix != 0) copy<Wide>(matrix + <usize>group * rowBytes + (blockStart >> 3), plane)
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
