import { fanouts, queue, summary } from './memory'

/** Pending gates as a bit set of two levels: a bit a gate, and a bit for each word of 64 gates that has any. */

/** Adds the fan-outs of the gate with that record; returns how many were not pending yet. */
// @ts-ignore: decorator
@inline
export function pushFanouts(record: usize, bits: usize, words: usize): i32 {
  const end = fanouts + (<usize>load<u32>(record, 28) << 2)
  let added = 0
  for (let at = fanouts + (<usize>load<u32>(record, 12) << 2); at < end; at += 4) {
    const gate = load<u32>(at)
    const word = bits + (<usize>(gate >> 6) << 3)
    const before = load<u64>(word)
    const bit = (<u64>1) << (gate & 63)
    added += i32((before & bit) == 0)
    store<u64>(word, before | bit)
    const above = words + (<usize>(gate >> 12) << 3)
    store<u64>(above, load<u64>(above) | ((<u64>1) << ((gate >> 6) & 63)))
  }
  return added
}

/** Takes the first pending gate at or after `from`; there must be one. */
// @ts-ignore: decorator
@inline
export function takeNext(from: u32, bits: usize, words: usize): u32 {
  let word = from >> 6
  let pending = load<u64>(bits + (<usize>word << 3))
  if (pending == 0) {
    let above = word >> 6
    let group = load<u64>(words + (<usize>above << 3))
    while (group == 0) group = load<u64>(words + (<usize>++above << 3))
    word = (above << 6) + <u32>ctz(group)
    pending = load<u64>(bits + (<usize>word << 3))
  }
  const rest = pending & (pending - 1)
  store<u64>(bits + (<usize>word << 3), rest)
  if (rest == 0) {
    const above = words + (<usize>(word >> 6) << 3)
    store<u64>(above, load<u64>(above) & ~((<u64>1) << (word & 63)))
  }
  return (word << 6) + <u32>ctz(pending)
}

/** Forgets what is pending, as far as the summary knows of it. */
export function emptyQueue(from: u32, pending: i32): void {
  let at = from
  for (let left = pending; left > 0; left--) at = takeNext(at, queue, summary)
}
