import { GateKind } from '../circuit/circuit.ts'
import { isGate } from '../circuit/circuit-builder.ts'
import { placeFaults, type FaultSites } from './fault-sites.ts'
import type { KernelTask } from './kernel-task.ts'
import { isInternal, orderNets, type NetOrder } from './net-order.ts'

/** The layout that this packer writes; a kernel built for another one is refused. */
export const LAYOUT_VERSION = 1

const NO_SLOT = 0xffffffff
const HEADER_WORDS = 16
/** Addresses below are left alone. */
const FIRST_ADDRESS = 1024
const LINE = 64

/** Gate classes of the kernel; see the kernel's good machine. */
const ONE_INPUT = 1
const AND_2 = 2
const XOR_2 = 3
const AND_N = 4
const XOR_N = 5

const UNWATCHED = 0
const WATCHED = 1
const WATCHED_BY_MASK = 2

/** A region of memory: byte address and length. */
export type Extent = { readonly at: number; readonly bytes: number }

/** Where everything lies in the kernel's memory, and what a thread must know to load patterns and gather results. */
export type KernelLayout = {
  /** A source of X drives a net that matters, so that every block is three-valued. */
  readonly unknownDrivers: boolean
  readonly blockWidth: number
  readonly nNets: number
  readonly nRegions: number
  readonly nClasses: number
  /** The slot of each input row (primary inputs, then flip-flops), −1 where no observed net depends on it. */
  readonly slotOfRow: Int32Array
  /** The response rows that each watch mask gathers, where a pattern's mask says what is observed. */
  readonly watchRows: readonly (readonly number[])[]
  readonly nRows: number
  readonly constants: readonly { readonly slot: number; readonly kind: number }[]
  /** Pairs of classes with the same effect at every output: the first gets the second's result. */
  readonly twins: FaultSites['twins']
  readonly shared: Shared
  /** What each thread has of its own; the parts of all threads follow each other from `ownStart`. */
  readonly own: Own
  readonly ownBytes: number
  readonly ownStart: number
}

/** What is written into the memory before the first block. */
export type KernelTables = { readonly order: NetOrder; readonly sites: FaultSites }

export type KernelPlan = { readonly layout: KernelLayout; readonly tables: KernelTables }

type Shared = Readonly<
  Record<
    | 'header'
    | 'gates'
    | 'sites'
    | 'pins'
    | 'pinClasses'
    | 'fanouts'
    | 'watched'
    | 'watchSlots'
    | 'regions'
    | 'taps'
    | 'masks'
    | 'first'
    | 'detections',
    Extent
  >
>

/** Offsets from the start of a thread's own part. */
type Own = Readonly<
  Record<
    | 'header'
    | 'values'
    | 'observability'
    | 'queue'
    | 'summary'
    | 'undo'
    | 'candidates'
    | 'watchMasks'
    | 'rowMasks'
    | 'valid'
    | 'scratch'
    | 'first'
    | 'detections'
    | 'possibly',
    Extent
  >
>

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
  const { circuit, patterns } = task
  const order = orderNets(circuit)
  const sites = placeFaults(task, order)
  const nNets = order.nets.length
  const plane = blockWidth / 8
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
  const threeValued = unknownDrivers || (patterns.unknown?.words.some((word) => word !== 0) ?? false)
  const watchRows = patterns.observed === null ? [] : rowsOfObservedNets(circuit, order)
  const nRows = patterns.observed === null ? 0 : circuit.outputs.length + circuit.flipFlops.length

  const shared = layOut(FIRST_ADDRESS, {
    header: 4 * HEADER_WORDS,
    gates: 16 * (nNets + 1),
    sites: 16 * nNets,
    pins: 4 * nPins,
    pinClasses: 8 * nPins,
    fanouts: 4 * nPins,
    watched: nNets,
    watchSlots: 4 * nNets,
    regions: 4 * (nRegions + 1),
    taps: 16 * sites.taps.length,
    masks: 4 * 32,
    first: 4 * task.nClasses,
    detections: 4 * task.nClasses,
  })
  const ownClasses = task.detectionLimit === 0 ? task.nClasses : 0
  const own = layOut(0, {
    header: 4 * HEADER_WORDS,
    values: nNets * plane * (threeValued ? 2 : 1),
    observability: nNets * plane * (threeValued ? 3 : 1),
    queue: 8 * (Math.floor(nNets / 64) + 1),
    summary: 8 * (Math.floor(nNets / 4096) + 1),
    undo: nNets * (plane * (threeValued ? 2 : 1) + 16),
    candidates: largestRegion(circuit, order) * (plane * (threeValued ? 2 : 1) + 16),
    watchMasks: watchRows.length * plane,
    rowMasks: nRows * plane,
    valid: plane,
    scratch: 16 * plane,
    first: 4 * ownClasses,
    detections: 4 * ownClasses,
    possibly: task.nClasses,
  })
  const layout = {
    unknownDrivers,
    blockWidth,
    nNets,
    nRegions,
    nClasses: task.nClasses,
    slotOfRow: slotsOfRows(circuit, order),
    watchRows,
    nRows,
    constants,
    twins: sites.twins,
    shared: shared.extents,
    own: own.extents,
    ownBytes: own.end,
    ownStart: shared.end,
  }
  return { layout, tables: { order, sites } }
}

/** How many blocks the task's patterns fill. */
export function blocksOf(layout: KernelLayout, task: KernelTask): number {
  return Math.ceil(task.patterns.nPatterns / layout.blockWidth)
}

/** Bytes of memory that the task takes on that many threads. */
export function kernelBytes(layout: KernelLayout, threads: number): number {
  return layout.ownStart + threads * layout.ownBytes
}

/** Writes what all threads share: the circuit's tables and empty results. The memory must be all zero there. */
export function writeShared(plan: KernelPlan, task: KernelTask, memory: ArrayBufferLike): void {
  const { circuit, patterns } = task
  const { layout } = plan
  const { order, sites } = plan.tables
  const { shared } = layout
  const words = (extent: Extent): Uint32Array => new Uint32Array(memory, extent.at, extent.bytes >> 2)
  const gates = words(shared.gates)
  const siteTable = words(shared.sites)
  const pins = words(shared.pins)
  const pinClasses = words(shared.pinClasses)
  const fanouts = words(shared.fanouts)
  const watched = new Uint8Array(memory, shared.watched.at, shared.watched.bytes)
  const watchSlots = words(shared.watchSlots)
  const fanoutEnd = new Uint32Array(layout.nNets)

  let fanoutStart = 0
  let watchSlot = 0
  for (let slot = 0; slot < layout.nNets; slot++) {
    const net = order.nets[slot]
    gates[4 * slot + 3] = fanoutEnd[slot] = fanoutStart
    fanoutStart += order.uses[net]
    watched[slot] =
      order.observed[net] === 0 ? UNWATCHED : patterns.observed === null ? WATCHED : WATCHED_BY_MASK
    if (watched[slot] === WATCHED_BY_MASK) watchSlots[slot] = watchSlot++
  }
  gates[4 * layout.nNets + 3] = fanoutStart

  let pin = 0
  for (let slot = 0; slot < layout.nNets; slot++) {
    const net = order.nets[slot]
    siteTable[4 * slot] = sites.netClasses[2 * slot]
    siteTable[4 * slot + 1] = sites.netClasses[2 * slot + 1]
    if (!isGate(circuit.kind[net])) continue
    const firstPin = pin
    for (let at = circuit.faninStart[net]; at < circuit.faninStart[net + 1]; at++) {
      const source = circuit.fanin[at]
      const sourceSlot = order.slotOf[source]
      pins[pin] = (sourceSlot << 1) | Number(isInternal(order, source))
      pinClasses[2 * pin] = sites.pinClasses[2 * at]
      pinClasses[2 * pin + 1] = sites.pinClasses[2 * at + 1]
      fanouts[fanoutEnd[sourceSlot]++] = slot
      pin++
    }
    const count = pin - firstPin
    siteTable[4 * slot + 2] = firstPin
    siteTable[4 * slot + 3] = count
    const { op, listed } = operation(circuit.kind[net], count)
    gates[4 * slot] = op
    gates[4 * slot + 1] = listed ? firstPin : pins[firstPin] >>> 1
    gates[4 * slot + 2] = listed ? count : pins[pin - 1] >>> 1
  }

  words(shared.regions).set(order.regionStart)
  const taps = words(shared.taps)
  sites.taps.forEach((tap, at) => {
    const row = patterns.observed === null ? NO_SLOT : tap.row
    taps.set([tap.slot, tap.classes[0], tap.classes[1], row], 4 * at)
  })
  const masks = words(shared.masks)
  for (let inversions = 0; inversions < 4; inversions++) {
    masks.fill(inversions & 1 ? NO_SLOT : 0, 8 * inversions, 8 * inversions + 4)
    masks.fill(inversions & 2 ? NO_SLOT : 0, 8 * inversions + 4, 8 * inversions + 8)
  }
  words(shared.first).fill(NO_SLOT)
  words(shared.header).set([
    layout.nNets,
    sites.taps.length,
    shared.gates.at,
    shared.sites.at,
    shared.pins.at,
    shared.pinClasses.at,
    shared.fanouts.at,
    shared.watched.at,
    shared.watchSlots.at,
    shared.regions.at,
    shared.taps.at,
    shared.masks.at,
  ])
}

/** Writes the header of one thread's own part. Results are kept apart where all detections count. */
export function writeOwn(layout: KernelLayout, thread: number, memory: ArrayBufferLike): void {
  const { own, shared } = layout
  const base = layout.ownStart + thread * layout.ownBytes
  const apart = own.first.bytes > 0
  new Uint32Array(memory, base, HEADER_WORDS).set([
    base + own.values.at,
    base + own.observability.at,
    base + own.queue.at,
    base + own.summary.at,
    base + own.undo.at,
    base + own.candidates.at,
    base + own.watchMasks.at,
    base + own.rowMasks.at,
    base + own.valid.at,
    base + own.scratch.at,
    apart ? base + own.first.at : shared.first.at,
    apart ? base + own.detections.at : shared.detections.at,
    base + own.possibly.at,
  ])
}

/** The kernel's code for a gate, and whether its inputs are listed in the pin table rather than in its record. */
function operation(kind: number, inputs: number): { op: number; listed: boolean } {
  const inverts =
    kind === GateKind.Not || kind === GateKind.Nand || kind === GateKind.Nor || kind === GateKind.Xnor
  const isXor = kind === GateKind.Xor || kind === GateKind.Xnor
  const isOr = kind === GateKind.Or || kind === GateKind.Nor
  const listed = inputs > 2
  if (inputs === 1) return { op: (ONE_INPUT << 2) | (inverts ? 2 : 0), listed }
  if (isXor) return { op: ((listed ? XOR_N : XOR_2) << 2) | (inverts ? 2 : 0), listed }
  // OR is AND with inputs and output inverted.
  const inward = isOr ? 1 : 0
  const outward = isOr !== inverts ? 2 : 0
  return { op: ((listed ? AND_N : AND_2) << 2) | inward | outward, listed }
}

function slotsOfRows(circuit: KernelTask['circuit'], order: NetOrder): Int32Array {
  const { inputs, flipFlops } = circuit
  const slots = new Int32Array(inputs.length + flipFlops.length)
  inputs.forEach((net, row) => (slots[row] = order.slotOf[net]))
  flipFlops.forEach((net, at) => (slots[inputs.length + at] = order.slotOf[net]))
  return slots
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

/** The most faults that one region, or one tap, can show at once. */
function largestRegion(circuit: KernelTask['circuit'], order: NetOrder): number {
  let largest = 2
  for (let region = 0; region + 1 < order.regionStart.length; region++) {
    let lines = 0
    for (let slot = order.regionStart[region]; slot < order.regionStart[region + 1]; slot++) {
      const net = order.nets[slot]
      lines += 1 + (isGate(circuit.kind[net]) ? circuit.faninStart[net + 1] - circuit.faninStart[net] : 0)
    }
    largest = Math.max(largest, 2 * lines)
  }
  return largest + 1
}
