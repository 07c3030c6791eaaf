import { GateKind } from '../circuit/circuit.ts'
import { isGate } from '../circuit/circuit-builder.ts'
import { buildGateTable, operationOf, type GateTable } from './gate-table.ts'
import { placeFaults, type FaultSites } from './fault-sites.ts'
import type { KernelTask } from './kernel-task.ts'
import { isInternal, orderNets, type NetOrder } from './net-order.ts'

/** The layout that this packer writes; a kernel built for another one is refused. */
export const LAYOUT_VERSION = 5

const NO_SLOT = 0xffffffff
const HEADER_WORDS = 32
/** Addresses below are left alone. */
const FIRST_ADDRESS = 1024
const LINE = 64

/** Planes that the kernel needs for intermediate results. */
const SCRATCH_PLANES = 40

/** A region of memory: byte address and length. */
export type Extent = { readonly at: number; readonly bytes: number }

/** Where everything lies in the kernel's memory, and what a thread must know to simulate and to gather results. */
export type KernelLayout = {
  readonly blockWidth: number
  readonly nBlocks: number
  readonly nPatterns: number
  readonly nNets: number
  readonly nRegions: number
  readonly nClasses: number
  readonly detectionLimit: number
  /** Words of a row of the detection matrix, where one is asked for; one row for each class that is simulated. */
  readonly matrixWords: number
  readonly matrixClasses: Uint32Array | null
  /** Detections in a block at which it reports of a class the count alone; null: blocks report nothing. */
  readonly easyFrom: number | null
  /** Pairs of classes with the same effect at every output: the first gets the second's result. */
  readonly twins: FaultSites['twins']
  readonly shared: Readonly<Record<SharedTable, Extent>>
  /** What each thread has of its own; the parts of all threads follow each other from `ownStart`. */
  readonly own: Readonly<Record<OwnTable, Extent>>
  readonly ownBytes: number
  readonly ownStart: number
}

/** In the order of the kernel's header, after the counts. */
const SHARED_TABLES = [
  'gates',
  'inputs',
  'sites',
  'pins',
  'pinClasses',
  'fanouts',
  'watchSlots',
  'watchRowStart',
  'watchRows',
  'regions',
  'taps',
  'masks',
  'constants',
  'inputSlots',
  'patternValues',
  'patternUnknowns',
  'patternObserved',
  'counted',
  'matrix',
  'matrixRows',
] as const

/** In the order of the header of a thread's own part. Extents count from the part's start. */
const OWN_TABLES = [
  'values',
  'observability',
  'effects',
  'known',
  'knownPass',
  'settled',
  'queue',
  'summary',
  'undo',
  'candidates',
  'watchMasks',
  'rowMasks',
  'valid',
  'scratch',
  'first',
  'detections',
  'possibly',
  'hardClasses',
  'hardPlanes',
  'easyClasses',
  'easyCounts',
] as const

type SharedTable = (typeof SHARED_TABLES)[number] | 'header' | 'first' | 'detections'
type OwnTable = (typeof OWN_TABLES)[number] | 'header'

/** What is written into the memory before the first block. */
export type KernelTables = {
  readonly order: NetOrder
  readonly gates: GateTable
  readonly sites: FaultSites
  readonly constants: readonly { readonly slot: number; readonly kind: number }[]
  /** The response rows that each watch mask gathers, where a pattern's mask says what is observed. */
  readonly watchRows: readonly (readonly number[])[]
  readonly unknownDrivers: boolean
}

export type KernelPlan = { readonly layout: KernelLayout; readonly tables: KernelTables }

/** Lays extents one after the other, each on a cache line. */
function layOut<K extends string>(
  start: number,
  sizes: Record<K, number>,
): { extents: Record<K, Extent>; end: number } {
  let at = start
  const extents = {} as Record<K, Extent>
  for (const name of Object.keys(sizes) as K[]) {
    extents[name] = { at, bytes: sizes[name] }
    at = Math.ceil((at + sizes[name]) / LINE) * LINE
  }
  return { extents, end: at }
}

/** Plans the memory of one task for a kernel whose blocks hold `blockWidth` patterns. */
export function planKernel(task: KernelTask, blockWidth: number): KernelPlan {
  const { circuit, patterns, nClasses, detectionLimit } = task
  const order = orderNets(circuit)
  const gates = buildGateTable(circuit, order, patterns.observed !== null)
  const sites = placeFaults(task, order)
  const nNets = order.nets.length
  const nRegions = order.regionStart.length - 1
  const constants: { slot: number; kind: number }[] = []
  let nPins = 0
  let unknownDrivers = false
  for (let slot = 0; slot < nNets; slot++) {
    const net = order.nets[slot]
    const kind = circuit.kind[net]
    if (isGate(kind)) nPins += circuit.faninStart[net + 1] - circuit.faninStart[net]
    else if (kind !== GateKind.Input && kind !== GateKind.FlipFlop) constants.push({ slot, kind })
    if (kind === GateKind.Unknown) unknownDrivers = true
  }
  const watchRows = patterns.observed === null ? [] : rowsOfObservedNets(circuit, order)
  const rowBytes = 4 * patterns.value.wordsPerRow
  const matrixRows = task.classes?.length ?? nClasses
  const reported = task.easyFrom === null ? 0 : sites.nActive

  const shared = layOut(FIRST_ADDRESS, {
    header: 4 * HEADER_WORDS,
    gates: 4 * gates.records.length,
    inputs: 4 * gates.inputs.length,
    sites: 16 * nNets,
    pins: 4 * nPins,
    pinClasses: 8 * nPins,
    fanouts: 4 * gates.fanouts.length,
    watchSlots: patterns.observed === null ? 0 : 4 * nNets,
    watchRowStart: 4 * (watchRows.length + 1),
    watchRows: 4 * watchRows.reduce((sum, rows) => sum + rows.length, 0),
    regions: 4 * (nRegions + 1),
    taps: 16 * sites.taps.length,
    masks: 4 * 12 * 8,
    constants: 8 * constants.length,
    inputSlots: 4 * patterns.value.rows,
    patternValues: patterns.value.rows * rowBytes,
    patternUnknowns: (patterns.unknown?.rows ?? 0) * rowBytes,
    patternObserved: (patterns.observed?.rows ?? 0) * rowBytes,
    counted: rowBytes,
    matrix: task.wantMatrix ? matrixRows * rowBytes : 0,
    matrixRows: task.wantMatrix ? 4 * nClasses : 0,
    first: 4 * nClasses,
    detections: 4 * nClasses,
  })
  const plane = blockWidth / 8
  const netPlanes = unknownDrivers || patterns.unknown !== null ? 2 : 1
  const region = largestRegion(circuit, order)
  // Where all detections count each thread counts for itself; else threads must know what others have found.
  const ownResults = detectionLimit === 0 ? nClasses : 0
  const noted = detectionLimit === 0 ? 0 : nNets
  const own = layOut(0, {
    header: 4 * HEADER_WORDS,
    values: nNets * netPlanes * plane,
    observability: nNets * plane,
    effects: region.nets * netPlanes * plane,
    known: noted * plane,
    knownPass: 4 * noted,
    settled: nRegions,
    queue: 8 * (Math.floor(nNets / 64) + 1),
    summary: 8 * (Math.floor(nNets / 4096) + 1),
    undo: nNets * (netPlanes * plane + 16),
    candidates: (region.faults + 1) * (netPlanes * plane + 16),
    watchMasks: watchRows.length * plane,
    rowMasks: (patterns.observed?.rows ?? 0) * plane,
    valid: plane,
    scratch: SCRATCH_PLANES * plane,
    first: 4 * ownResults,
    detections: 4 * ownResults,
    possibly: nClasses,
    hardClasses: 4 * reported,
    hardPlanes: reported * plane,
    easyClasses: 4 * reported,
    easyCounts: 4 * reported,
  })
  const layout = {
    blockWidth,
    nBlocks: Math.ceil(patterns.nPatterns / blockWidth),
    nPatterns: patterns.nPatterns,
    nNets,
    nRegions,
    nClasses,
    detectionLimit,
    matrixWords: task.wantMatrix ? patterns.value.wordsPerRow : 0,
    matrixClasses: task.classes,
    easyFrom: task.easyFrom,
    twins: sites.twins,
    shared: shared.extents,
    own: own.extents,
    ownBytes: own.end,
    ownStart: shared.end,
  }
  return { layout, tables: { order, gates, sites, constants, watchRows, unknownDrivers } }
}

/** Bytes of memory that the task takes on that many threads. */
export function kernelBytes(layout: KernelLayout, threads: number): number {
  return layout.ownStart + threads * layout.ownBytes
}

/** Writes what all threads share: circuit, patterns, and empty results. The memory must be all zero there. */
export function writeShared(plan: KernelPlan, task: KernelTask, memory: ArrayBufferLike): void {
  const { circuit, patterns } = task
  const { shared } = plan.layout
  const { order, sites, constants, watchRows, unknownDrivers } = plan.tables
  const words = (extent: Extent): Uint32Array => new Uint32Array(memory, extent.at, extent.bytes >> 2)
  writeCircuit(plan, task, memory)
  const taps = words(shared.taps)
  sites.taps.forEach((tap, at) => {
    const row = patterns.observed === null ? NO_SLOT : tap.row
    taps.set([tap.slot, tap.classes[0], tap.classes[1], row], 4 * at)
  })
  const masks = words(shared.masks)
  for (let inversions = 0; inversions < 8; inversions++) {
    for (let bit = 0; bit < 3; bit++) {
      const at = 12 * inversions + 4 * bit
      masks.fill((inversions >>> bit) & 1 ? NO_SLOT : 0, at, at + 4)
    }
  }
  const constantTable = words(shared.constants)
  constants.forEach(({ slot, kind }, at) => {
    const planes = kind === GateKind.Const1 ? 1 : kind === GateKind.Const0 ? 2 : 0
    constantTable.set([slot, planes], 2 * at)
  })
  const rowStart = words(shared.watchRowStart)
  watchRows.forEach((rows, watch) => {
    rowStart[watch + 1] = rowStart[watch] + rows.length
    words(shared.watchRows).set(rows, rowStart[watch])
  })
  const inputSlots = words(shared.inputSlots)
  circuit.inputs.forEach((net, row) => (inputSlots[row] = order.slotOf[net]))
  circuit.flipFlops.forEach((net, at) => (inputSlots[circuit.inputs.length + at] = order.slotOf[net]))
  words(shared.patternValues).set(patterns.value.words)
  if (patterns.unknown !== null) words(shared.patternUnknowns).set(patterns.unknown.words)
  if (patterns.observed !== null) words(shared.patternObserved).set(patterns.observed.words)
  writeCounted(patterns, words(shared.counted))
  const matrixRows = words(shared.matrixRows)
  if (task.classes === null) matrixRows.forEach((_, group) => (matrixRows[group] = group))
  else if (task.wantMatrix) task.classes.forEach((group, row) => (matrixRows[group] = row))
  words(shared.first).fill(NO_SLOT)
  words(shared.header).set([
    sites.taps.length,
    constants.length,
    patterns.value.rows,
    patterns.observed?.rows ?? 0,
    watchRows.length,
    4 * patterns.value.wordsPerRow,
    Number(unknownDrivers),
    ...SHARED_TABLES.map((table) => (shared[table].bytes === 0 ? 0 : shared[table].at)),
  ])
}

function writeCircuit(plan: KernelPlan, task: KernelTask, memory: ArrayBufferLike): void {
  const { circuit, patterns } = task
  const { shared } = plan.layout
  const { order, gates, sites } = plan.tables
  const words = (extent: Extent): Uint32Array => new Uint32Array(memory, extent.at, extent.bytes >> 2)
  words(shared.gates).set(gates.records)
  words(shared.inputs).set(gates.inputs)
  words(shared.fanouts).set(gates.fanouts)
  words(shared.regions).set(order.regionStart)
  const siteTable = words(shared.sites)
  const pins = words(shared.pins)
  const pinClasses = words(shared.pinClasses)
  const watchSlots = words(shared.watchSlots)
  let watches = 0
  let pin = 0
  for (let slot = 0; slot < order.nets.length; slot++) {
    const net = order.nets[slot]
    if (patterns.observed !== null && order.observed[net] === 1) watchSlots[slot] = watches++
    siteTable[4 * slot] = sites.netClasses[2 * slot]
    siteTable[4 * slot + 1] = sites.netClasses[2 * slot + 1]
    if (!isGate(circuit.kind[net])) continue
    const firstPin = pin
    for (let at = circuit.faninStart[net]; at < circuit.faninStart[net + 1]; at++) {
      const source = circuit.fanin[at]
      pins[pin] = (order.slotOf[source] << 1) | Number(isInternal(order, source))
      pinClasses[2 * pin] = sites.pinClasses[2 * at]
      pinClasses[2 * pin + 1] = sites.pinClasses[2 * at + 1]
      pin++
    }
    const count = pin - firstPin
    siteTable[4 * slot + 2] = firstPin
    siteTable[4 * slot + 3] = (count << 8) | operationOf(circuit.kind[net], count)
  }
}

/** Writes 1 for each pattern that counts for coverage. */
function writeCounted({ nPatterns, timeOnly }: KernelTask['patterns'], words: Uint32Array): void {
  words.fill(NO_SLOT, 0, nPatterns >>> 5)
  if (nPatterns & 31) words[nPatterns >>> 5] = 2 ** (nPatterns & 31) - 1
  timeOnly?.forEach((only, pattern) => {
    if (only) words[pattern >>> 5] &= ~(1 << (pattern & 31))
  })
}

/** Writes the header of one thread's own part. */
export function writeOwn(layout: KernelLayout, thread: number, memory: ArrayBufferLike): void {
  const { own, shared } = layout
  const base = layout.ownStart + thread * layout.ownBytes
  const addressOf = (table: (typeof OWN_TABLES)[number]): number => {
    if ((table === 'first' || table === 'detections') && own[table].bytes === 0) return shared[table].at
    return own[table].bytes === 0 ? 0 : base + own[table].at
  }
  new Uint32Array(memory, base, HEADER_WORDS).set(OWN_TABLES.map(addressOf))
}

/** The response rows that observe each observed net, in the order of the nets' slots. */
function rowsOfObservedNets(circuit: KernelTask['circuit'], order: NetOrder): number[][] {
  const rowsOf = new Map<number, number[]>()
  for (const net of order.nets) if (order.observed[net] === 1) rowsOf.set(net, [])
  circuit.outputs.forEach((net, row) => rowsOf.get(net)?.push(row))
  circuit.flipFlops.forEach((net, at) => {
    rowsOf.get(circuit.fanin[circuit.faninStart[net]])?.push(circuit.outputs.length + at)
  })
  return [...rowsOf.values()]
}

/** The most nets that one region has, and the most faults that one region, or one tap, can show at once. */
function largestRegion(circuit: KernelTask['circuit'], order: NetOrder): { nets: number; faults: number } {
  let nets = 0
  let faults = 2
  for (let region = 0; region + 1 < order.regionStart.length; region++) {
    const start = order.regionStart[region]
    const end = order.regionStart[region + 1]
    let lines = end - start
    for (let slot = start; slot < end; slot++) {
      const net = order.nets[slot]
      if (isGate(circuit.kind[net])) lines += circuit.faninStart[net + 1] - circuit.faninStart[net]
    }
    nets = Math.max(nets, end - start)
    faults = Math.max(faults, 2 * lines)
  }
  return { nets, faults }
}
