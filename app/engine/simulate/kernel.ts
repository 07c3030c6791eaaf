import type { DetectionMatrix, DetectionProfile } from './detection-profile.ts'
import { withTwins, type BlockReport } from './block-report.ts'
import { LAYOUT_VERSION, type KernelLayout } from './kernel-layout.ts'

/** What the compiled kernel exports. Addresses are bytes into the memory that it was given. */
export type KernelExports = {
  layoutVersion(): number
  patternsPerBlock(): number
  attach(shared: number, own: number): void
  loadBlock(block: number, detectionLimit: number): void
  evaluateGood(from: number, to: number): void
  usePatterns(from: number, to: number): void
  simulateRegions(from: number, to: number, budget: number): number
  simulateTaps(): void
  beginReport(easyFrom: number): void
  hardReported(): number
  easyReported(): number
}

/** Throws where the kernel was built for another layout of memory than this program packs. */
export function checkKernel(kernel: KernelExports): void {
  const version = 'layoutVersion' in kernel ? kernel.layoutVersion() : 'none'
  if (version !== LAYOUT_VERSION) {
    throw new Error(
      `The simulation kernel has layout ${version}, this program packs layout ${LAYOUT_VERSION}: build it again.`,
    )
  }
}

/** Gates that are evaluated between two looks at whether to go on: a few milliseconds. */
const BUDGET = 100_000

/**
 * Where dropping pays most the first block is simulated in ranges of few patterns first, so that faults that most
 * patterns detect are gone when many patterns at once have to be propagated.
 */
const FIRST_RANGES = [128]

/** Parts into which the first block's regions are split, so that several threads share its work. */
const PARTS = 16

/**
 * How a run is split into units that threads claim one after the other: first, where faults are dropped and nothing has
 * been simulated before, parts of the first block; then whole blocks.
 */
export type Units = { readonly count: number; readonly inFirstBlock: number; readonly firstBlock: number }

/** The units of a run whose blocks before `blocksDone` have been simulated already. */
export function unitsOf(layout: KernelLayout, blocksDone: number): Units {
  const split = layout.detectionLimit > 0 && blocksDone === 0
  const inFirstBlock = split ? PARTS * rangesOf(layout).length : 0
  const left = Math.max(0, layout.nBlocks - blocksDone)
  return {
    count: inFirstBlock + (split ? Math.max(0, left - 1) : left),
    inFirstBlock,
    firstBlock: blocksDone,
  }
}

/** How many blocks are done once all units before `unit` are. */
export function blocksBefore(units: Units, unit: number): number {
  if (units.inFirstBlock === 0) return units.firstBlock + unit
  return unit < units.inFirstBlock ? 0 : 1 + unit - units.inFirstBlock
}

function rangesOf(layout: KernelLayout): number[] {
  return [...FIRST_RANGES.filter((end) => end < layout.nPatterns), layout.blockWidth]
}

/** One thread's hold on the kernel. */
export class KernelThread {
  private readonly kernel: KernelExports
  private readonly layout: KernelLayout
  private readonly base: number
  private loaded = -1

  /** Threads are numbered from 0; the header of each one's own part must have been written. */
  constructor(kernel: KernelExports, layout: KernelLayout, thread: number) {
    this.kernel = kernel
    this.layout = layout
    this.base = layout.ownStart + thread * layout.ownBytes
    kernel.attach(layout.shared.header.at, this.base)
  }

  /** Simulates one unit. `goOn` is asked every few milliseconds; false stops at once, and the unit counts as not done. */
  simulateUnit(units: Units, unit: number, goOn: () => boolean): boolean {
    const { kernel, layout } = this
    if (unit >= units.inFirstBlock) {
      if (!this.load(blocksBefore(units, unit), goOn)) return false
      if (layout.easyFrom !== null) kernel.beginReport(layout.easyFrom)
      kernel.usePatterns(0, layout.blockWidth)
      return this.simulateRegions(layout.nRegions, 0, goOn)
    }
    const ranges = rangesOf(layout)
    const range = Math.floor(unit / PARTS)
    const part = PARTS - 1 - (unit % PARTS)
    const edge = (at: number): number => Math.round((at * layout.nRegions) / PARTS)
    if (!this.load(0, goOn)) return false
    kernel.usePatterns(range === 0 ? 0 : ranges[range - 1], ranges[range])
    return this.simulateRegions(edge(part + 1), edge(part), goOn)
  }

  /** What the last block detected, copied out of the kernel's memory. The layout must have been planned for reports. */
  report(memory: ArrayBufferLike): BlockReport {
    const { kernel, layout, base } = this
    const hard = kernel.hardReported()
    const easy = kernel.easyReported()
    const words = (
      table: 'hardClasses' | 'hardPlanes' | 'easyClasses' | 'easyCounts',
      count: number,
    ): Uint32Array => new Uint32Array(memory, base + layout.own[table].at, count).slice()
    const report = {
      firstPattern: this.loaded * layout.blockWidth,
      wordsPerRow: layout.blockWidth / 32,
      hardClasses: words('hardClasses', hard),
      hardWords: words('hardPlanes', hard * (layout.blockWidth / 32)),
      easyClasses: words('easyClasses', easy),
      easyCounts: words('easyCounts', easy),
    }
    return layout.twins.length === 0 ? report : withTwins(report, layout.twins)
  }

  private load(block: number, goOn: () => boolean): boolean {
    const { kernel, layout } = this
    if (this.loaded === block) return true
    this.loaded = -1
    kernel.loadBlock(block, layout.detectionLimit)
    for (let net = 0; net < layout.nNets; net += BUDGET) {
      if (!goOn()) return false
      kernel.evaluateGood(net, Math.min(layout.nNets, net + BUDGET))
    }
    this.loaded = block
    return true
  }

  private simulateRegions(from: number, to: number, goOn: () => boolean): boolean {
    const { kernel } = this
    for (let region = from; region > to; region = kernel.simulateRegions(region, to, BUDGET)) {
      if (!goOn()) return false
    }
    if (to === 0) kernel.simulateTaps()
    return true
  }
}

/** Puts an earlier profile of the same task into the memory, so that simulation goes on from there. */
export function resumeProfile(
  layout: KernelLayout,
  memory: ArrayBufferLike,
  profile: DetectionProfile,
): void {
  const { own, shared, ownStart, nClasses } = layout
  const apart = own.first.bytes > 0
  const first = new Int32Array(memory, apart ? ownStart + own.first.at : shared.first.at, nClasses)
  const detections = new Uint32Array(
    memory,
    apart ? ownStart + own.detections.at : shared.detections.at,
    nClasses,
  )
  first.set(profile.first)
  detections.set(profile.detections)
  new Uint8Array(memory, ownStart + own.possibly.at, nClasses).set(profile.possibly)
}

/** Gathers the results that threads left in the kernel's memory into one profile. */
export function gatherProfile(
  layout: KernelLayout,
  memory: ArrayBufferLike,
  threads: number,
): DetectionProfile {
  const { nClasses, own, shared, detectionLimit } = layout
  const first = new Int32Array(nClasses).fill(-1)
  const detections = new Uint32Array(nClasses)
  const possibly = new Uint8Array(nClasses)
  const bases = Array.from({ length: threads }, (_, thread) => layout.ownStart + thread * layout.ownBytes)
  for (const base of bases) {
    const found = new Uint8Array(memory, base + own.possibly.at, nClasses)
    for (let group = 0; group < nClasses; group++) possibly[group] |= found[group]
  }
  const results =
    own.first.bytes > 0
      ? bases.map((base) => ({ first: base + own.first.at, detections: base + own.detections.at }))
      : [{ first: shared.first.at, detections: shared.detections.at }]
  for (const result of results) {
    const foundFirst = new Uint32Array(memory, result.first, nClasses)
    const found = new Uint32Array(memory, result.detections, nClasses)
    for (let group = 0; group < nClasses; group++) {
      if (found[group] === 0) continue
      detections[group] += found[group]
      if (first[group] < 0 || foundFirst[group] < first[group]) first[group] = foundFirst[group]
    }
  }
  for (let group = 0; group < nClasses; group++) {
    if (detections[group] === 0) continue
    possibly[group] = 0
    if (detectionLimit > 0) detections[group] = Math.min(detectionLimit, detections[group])
  }
  for (const [group, same] of layout.twins) {
    first[group] = first[same]
    detections[group] = detections[same]
    possibly[group] = possibly[same]
  }
  return { nClasses, nPatterns: layout.nPatterns, detectionLimit, first, detections, possibly }
}

/** Returns the rows of detected classes, moved together at the front of the kernel's own matrix. Null: none was kept. */
export function gatherMatrix(
  layout: KernelLayout,
  profile: DetectionProfile,
  memory: ArrayBufferLike,
): DetectionMatrix | null {
  const wordsPerRow = layout.matrixWords
  if (wordsPerRow === 0) return null
  const { shared, matrixClasses, nClasses, nPatterns } = layout
  const words = new Uint32Array(memory, shared.matrix.at, shared.matrix.bytes >> 2)
  const rowOf = new Uint32Array(memory, shared.matrixRows.at, nClasses)
  const moveRow = (to: number, from: number): void => {
    words.copyWithin(to * wordsPerRow, from * wordsPerRow, (from + 1) * wordsPerRow)
  }
  for (const [group, same] of layout.twins) moveRow(rowOf[group], rowOf[same])
  const detected: number[] = []
  for (let row = 0; row < (matrixClasses?.length ?? nClasses); row++) {
    const group = matrixClasses?.[row] ?? row
    if (profile.detections[group] === 0) continue
    moveRow(detected.length, row)
    detected.push(group)
  }
  const classOfRow = Uint32Array.from(detected)
  const kept = words.subarray(0, detected.length * wordsPerRow)
  return { nPatterns, nRows: detected.length, wordsPerRow, classOfRow, words: kept }
}
