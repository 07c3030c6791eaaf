import { GateKind } from '../circuit/circuit.ts'
import type { DetectionProfile } from './detection-profile.ts'
import { LAYOUT_VERSION, type KernelLayout } from './kernel-layout.ts'
import type { KernelTask } from './kernel-task.ts'

/** So few that even the largest take far less than the time in which a cancelled run must stop. */
const REGIONS_AT_ONCE = 16

/** What the compiled kernel exports. Addresses are bytes into the memory that it was given. */
export type KernelExports = {
  layoutVersion(): number
  patternsPerBlock(): number
  attach(shared: number, own: number): void
  beginBlock(firstPattern: number, detectionLimit: number): void
  evaluateGood(): void
  simulateRegions(from: number, to: number): void
  simulateTaps(): void
  evaluateGoodThreeValued(): void
  simulateRegionsThreeValued(from: number, to: number): void
  simulateTapsThreeValued(): void
}

/** Throws where the kernel was built for another layout of memory than this program packs. */
export function checkKernel(kernel: KernelExports): void {
  const version = kernel.layoutVersion()
  if (version !== LAYOUT_VERSION) {
    throw new Error(
      `The simulation kernel has layout ${version}, this program packs layout ${LAYOUT_VERSION}: build it again.`,
    )
  }
}

/** One thread's hold on the kernel: loads a block of patterns into its own part of the memory and simulates it. */
export class KernelThread {
  private readonly kernel: KernelExports
  private readonly layout: KernelLayout
  private readonly task: KernelTask
  private readonly words: Uint32Array
  private readonly base: number

  /** Threads are numbered from 0; the header of each one's own part must have been written. */
  constructor(
    kernel: KernelExports,
    layout: KernelLayout,
    task: KernelTask,
    memory: ArrayBufferLike,
    thread: number,
  ) {
    this.kernel = kernel
    this.layout = layout
    this.task = task
    this.words = new Uint32Array(memory)
    this.base = layout.ownStart + thread * layout.ownBytes
    kernel.attach(layout.shared.header.at, this.base)
  }

  /** Simulates one block. `goOn` is asked between parts of it; false stops at once, and the block counts as not done. */
  simulateBlock(block: number, goOn: () => boolean): boolean {
    const { kernel, layout, task } = this
    const threeValued = layout.unknownDrivers || this.hasUnknown(block)
    const simulateRegions = threeValued ? kernel.simulateRegionsThreeValued : kernel.simulateRegions
    this.loadConstants(threeValued)
    this.loadPatterns(block, threeValued)
    this.loadMasks(block)
    kernel.beginBlock(block * layout.blockWidth, task.detectionLimit)
    if (threeValued) kernel.evaluateGoodThreeValued()
    else kernel.evaluateGood()
    for (let from = layout.nRegions; from > 0; from -= REGIONS_AT_ONCE) {
      if (!goOn()) return false
      simulateRegions(from, Math.max(0, from - REGIONS_AT_ONCE))
    }
    if (threeValued) kernel.simulateTapsThreeValued()
    else kernel.simulateTaps()
    return true
  }

  private hasUnknown(block: number): boolean {
    const { unknown } = this.task.patterns
    if (unknown === null) return false
    const planeWords = this.layout.blockWidth / 32
    for (let row = 0; row < unknown.rows; row++) {
      const from = row * unknown.wordsPerRow + block * planeWords
      for (let word = from; word < from + planeWords; word++) if (unknown.words[word] !== 0) return true
    }
    return false
  }

  /** Two-valued, a net has one plane; three-valued it has two: known 1, then known 0. */
  private loadConstants(threeValued: boolean): void {
    const { layout, words } = this
    const planeWords = layout.blockWidth / 32
    const netWords = threeValued ? 2 * planeWords : planeWords
    for (const { slot, kind } of layout.constants) {
      const at = ((this.base + layout.own.values.at) >> 2) + slot * netWords
      words.fill(kind === GateKind.Const1 ? 0xffffffff : 0, at, at + planeWords)
      if (threeValued) words.fill(kind === GateKind.Const0 ? 0xffffffff : 0, at + planeWords, at + netWords)
    }
  }

  private loadPatterns(block: number, threeValued: boolean): void {
    const { layout, words } = this
    const { value, unknown } = this.task.patterns
    const planeWords = layout.blockWidth / 32
    const netWords = threeValued ? 2 * planeWords : planeWords
    const values = (this.base + layout.own.values.at) >> 2
    for (let row = 0; row < value.rows; row++) {
      const slot = layout.slotOfRow[row]
      if (slot < 0) continue
      const from = row * value.wordsPerRow + block * planeWords
      const to = values + slot * netWords
      for (let word = 0; word < planeWords; word++) {
        const bits = value.words[from + word]
        if (!threeValued) words[to + word] = bits
        else {
          const known =
            unknown === null ? -1 : ~unknown.words[row * unknown.wordsPerRow + block * planeWords + word]
          words[to + word] = bits & known
          words[to + planeWords + word] = ~bits & known
        }
      }
    }
  }

  private loadMasks(block: number): void {
    const { layout, words, task } = this
    const { observed } = task.patterns
    const planeWords = layout.blockWidth / 32
    const from = block * planeWords
    const valid = (this.base + layout.own.valid.at) >> 2
    for (let word = 0; word < planeWords; word++) words[valid + word] = this.validBits(from + word)
    if (observed === null) return
    const rowMasks = (this.base + layout.own.rowMasks.at) >> 2
    for (let row = 0; row < layout.nRows; row++) {
      for (let word = 0; word < planeWords; word++) {
        words[rowMasks + row * planeWords + word] =
          observed.words[row * observed.wordsPerRow + from + word] & words[valid + word]
      }
    }
    const watchMasks = (this.base + layout.own.watchMasks.at) >> 2
    layout.watchRows.forEach((rows, watch) => {
      for (let word = 0; word < planeWords; word++) {
        let bits = 0
        for (const row of rows) bits |= words[rowMasks + row * planeWords + word]
        words[watchMasks + watch * planeWords + word] = bits
      }
    })
  }

  /** The bits of a word that stand for patterns that count for coverage. */
  private validBits(word: number): number {
    const { nPatterns, timeOnly } = this.task.patterns
    let bits = 0
    for (let bit = 0; bit < 32; bit++) {
      const pattern = 32 * word + bit
      if (pattern < nPatterns && !timeOnly?.[pattern]) bits |= 1 << bit
    }
    return bits
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
  task: KernelTask,
  memory: ArrayBufferLike,
  threads: number,
): DetectionProfile {
  const { nClasses, own, shared } = layout
  const limit = task.detectionLimit
  const first = new Int32Array(nClasses).fill(-1)
  const detections = new Uint32Array(nClasses)
  const possibly = new Uint8Array(nClasses)
  const sources =
    own.first.bytes > 0
      ? Array.from({ length: threads }, (_, thread) => {
          const base = layout.ownStart + thread * layout.ownBytes
          return { first: base + own.first.at, detections: base + own.detections.at }
        })
      : [{ first: shared.first.at, detections: shared.detections.at }]
  for (let thread = 0; thread < threads; thread++) {
    const own = layout.ownStart + thread * layout.ownBytes + layout.own.possibly.at
    const threadPossibly = new Uint8Array(memory, own, nClasses)
    for (let group = 0; group < nClasses; group++) possibly[group] |= threadPossibly[group]
  }
  for (const source of sources) {
    const threadFirst = new Uint32Array(memory, source.first, nClasses)
    const threadDetections = new Uint32Array(memory, source.detections, nClasses)
    for (let group = 0; group < nClasses; group++) {
      if (threadDetections[group] === 0) continue
      detections[group] += threadDetections[group]
      if (first[group] < 0 || threadFirst[group] < first[group]) first[group] = threadFirst[group]
    }
  }
  for (let group = 0; group < nClasses; group++) if (detections[group] > 0) possibly[group] = 0
  if (limit > 0)
    for (let group = 0; group < nClasses; group++) detections[group] = Math.min(limit, detections[group])
  for (const [group, same] of layout.twins) {
    first[group] = first[same]
    detections[group] = detections[same]
    possibly[group] = possibly[same]
  }
  return { nClasses, nPatterns: task.patterns.nPatterns, detectionLimit: limit, first, detections, possibly }
}
