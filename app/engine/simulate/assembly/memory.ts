/** Where the tables lie: byte addresses, read once from the headers that the packer writes. */

/** Grows with every change of tables or headers, so that a driver refuses a kernel of another build. */
const LAYOUT_VERSION: u32 = 4

export function layoutVersion(): u32 {
  return LAYOUT_VERSION
}

export let nNets: u32 = 0
export let nRegions: u32 = 0
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

/** Points the tables at one circuit's memory and at one thread's own part of it. */
export function attach(shared: usize, own: usize): void {
  nNets = load<u32>(shared, 0)
  nRegions = load<u32>(shared, 4)
  nTaps = load<u32>(shared, 8)
  nConstants = load<u32>(shared, 12)
  nInputRows = load<u32>(shared, 16)
  nResponseRows = load<u32>(shared, 20)
  nWatches = load<u32>(shared, 24)
  rowBytes = load<u32>(shared, 28)
  unknownDrivers = load<u32>(shared, 32)
  gates = load<u32>(shared, 36)
  inputs = load<u32>(shared, 40)
  sites = load<u32>(shared, 44)
  pins = load<u32>(shared, 48)
  pinClasses = load<u32>(shared, 52)
  fanouts = load<u32>(shared, 56)
  watchSlots = load<u32>(shared, 60)
  watchRowStart = load<u32>(shared, 64)
  watchRows = load<u32>(shared, 68)
  regions = load<u32>(shared, 72)
  taps = load<u32>(shared, 76)
  masks = load<u32>(shared, 80)
  constants = load<u32>(shared, 84)
  inputSlots = load<u32>(shared, 88)
  patternValues = load<u32>(shared, 92)
  patternUnknowns = load<u32>(shared, 96)
  patternObserved = load<u32>(shared, 100)
  counted = load<u32>(shared, 104)
  matrix = load<u32>(shared, 108)
  matrixRows = load<u32>(shared, 112)

  values = load<u32>(own, 0)
  observability = load<u32>(own, 4)
  effects = load<u32>(own, 8)
  known = load<u32>(own, 12)
  knownPass = load<u32>(own, 16)
  settled = load<u32>(own, 20)
  queue = load<u32>(own, 24)
  summary = load<u32>(own, 28)
  undo = load<u32>(own, 32)
  candidates = load<u32>(own, 36)
  watchMasks = load<u32>(own, 40)
  rowMasks = load<u32>(own, 44)
  valid = load<u32>(own, 48)
  scratch = load<u32>(own, 52)
  first = load<u32>(own, 56)
  detections = load<u32>(own, 60)
  possibly = load<u32>(own, 64)
  hardClasses = load<u32>(own, 68)
  hardPlanes = load<u32>(own, 72)
  easyClasses = load<u32>(own, 76)
  easyCounts = load<u32>(own, 80)
}
