/** Where the tables lie: byte addresses, read once from the headers that the packer writes. */

/** Grows with every change of tables or headers, so that a driver refuses a kernel of another build. */
const LAYOUT_VERSION: u32 = 1

export function layoutVersion(): u32 {
  return LAYOUT_VERSION
}

export let nNets: u32 = 0
export let nTaps: u32 = 0
export let gates: usize = 0
export let sites: usize = 0
export let pins: usize = 0
export let pinClasses: usize = 0
export let fanouts: usize = 0
export let watched: usize = 0
export let watchSlots: usize = 0
export let regions: usize = 0
export let taps: usize = 0
export let masks: usize = 0

export let values: usize = 0
export let observability: usize = 0
export let queue: usize = 0
export let summary: usize = 0
export let undo: usize = 0
export let candidates: usize = 0
export let watchMasks: usize = 0
export let rowMasks: usize = 0
export let valid: usize = 0
export let scratch: usize = 0
export let first: usize = 0
export let detections: usize = 0
export let possibly: usize = 0

/** Points the tables at one circuit's memory and at one thread's own part of it. */
export function attach(shared: usize, own: usize): void {
  nNets = load<u32>(shared, 0)
  nTaps = load<u32>(shared, 4)
  gates = load<u32>(shared, 8)
  sites = load<u32>(shared, 12)
  pins = load<u32>(shared, 16)
  pinClasses = load<u32>(shared, 20)
  fanouts = load<u32>(shared, 24)
  watched = load<u32>(shared, 28)
  watchSlots = load<u32>(shared, 32)
  regions = load<u32>(shared, 36)
  taps = load<u32>(shared, 40)
  masks = load<u32>(shared, 44)

  values = load<u32>(own, 0)
  observability = load<u32>(own, 4)
  queue = load<u32>(own, 8)
  summary = load<u32>(own, 12)
  undo = load<u32>(own, 16)
  candidates = load<u32>(own, 20)
  watchMasks = load<u32>(own, 24)
  rowMasks = load<u32>(own, 28)
  valid = load<u32>(own, 32)
  scratch = load<u32>(own, 36)
  first = load<u32>(own, 40)
  detections = load<u32>(own, 44)
  possibly = load<u32>(own, 48)
}
