/** Where the tables lie: byte addresses, read once from the headers that the packer writes. */

/** Grows with every change of tables or headers, so that a driver refuses a kernel of another build. */
const LAYOUT_VERSION: u32 = 5

export function layoutVersion(): u32 {
  return LAYOUT_VERSION
}

export let nTaps: u32 = 0
export let nConstants: u32 = 0
export let nInputRows: u32 = 0
export let nResponseRows: u32 = 0
export let nWatches: u32 = 0
/** Bytes of one row of the pattern planes, and of one row of the detection matrix. */
export let rowBytes: u32 = 0
/** 1 where a source of X drives a net that matters, so that every block is three-valued. */
export let unknownDrivers: u32 = 0

export let gates: usize = 0
export let inputs: usize = 0
export let sites: usize = 0
export let pins: usize = 0
export let pinClasses: usize = 0
export let fanouts: usize = 0
export let watchSlots: usize = 0
export let watchRowStart: usize = 0
export let watchRows: usize = 0
export let regions: usize = 0
export let taps: usize = 0
export let masks: usize = 0
export let constants: usize = 0
export let inputSlots: usize = 0
/** Pattern planes, row-major; 0 where the set has none of that kind. */
export let patternValues: usize = 0
export let patternUnknowns: usize = 0
export let patternObserved: usize = 0
/** One row: the patterns that count for coverage. */
export let counted: usize = 0
/** Which pattern detects which class, a row of patterns a row of the matrix; 0 where not asked for. */
export let matrix: usize = 0
/** The matrix row of each class. */
export let matrixRows: usize = 0

export let values: usize = 0
export let observability: usize = 0
export let effects: usize = 0
export let known: usize = 0
export let knownPass: usize = 0
export let settled: usize = 0
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
/** What one block detects, in the order in which it is found; 0 where not asked for. */
export let hardClasses: usize = 0
export let hardPlanes: usize = 0
export let easyClasses: usize = 0
export let easyCounts: usize = 0

let cursor: usize = 0

function next(): u32 {
  cursor += 4
  return load<u32>(cursor - 4)
}

/** Points the tables at one circuit's memory and at one thread's own part of it. */
export function attach(shared: usize, own: usize): void {
  cursor = shared
  nTaps = next()
  nConstants = next()
  nInputRows = next()
  nResponseRows = next()
  nWatches = next()
  rowBytes = next()
  unknownDrivers = next()
  gates = next()
  inputs = next()
  sites = next()
  pins = next()
  pinClasses = next()
  fanouts = next()
  watchSlots = next()
  watchRowStart = next()
  watchRows = next()
  regions = next()
  taps = next()
  masks = next()
  constants = next()
  inputSlots = next()
  patternValues = next()
  patternUnknowns = next()
  patternObserved = next()
  counted = next()
  matrix = next()
  matrixRows = next()

  cursor = own
  values = next()
  observability = next()
  effects = next()
  known = next()
  knownPass = next()
  settled = next()
  queue = next()
  summary = next()
  undo = next()
  candidates = next()
  watchMasks = next()
  rowMasks = next()
  valid = next()
  scratch = next()
  first = next()
  detections = next()
  possibly = next()
  hardClasses = next()
  hardPlanes = next()
  easyClasses = next()
  easyCounts = next()
}
