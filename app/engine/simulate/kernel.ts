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
    this.loadConstants()
  }

  /** Simulates one block. `goOn` is asked between parts of it; false stops at once, and the block counts as not done. */
  simulateBlock(block: number, goOn: () => boolean): boolean {
    const { kernel, layout, task } = this
    this.loadPatterns(block)
    kernel.beginBlock(block * layout.blockWidth, task.detectionLimit)
    kernel.evaluateGood()
    for (let from = layout.nRegions; from > 0; from -= REGIONS_AT_ONCE) {
      if (!goOn()) return false
      kernel.simulateRegions(from, Math.max(0, from - REGIONS_AT_ONCE))
    }
    kernel.simulateTaps()
    return true
  }

  private loadConstants(): void {
    const { layout, words } = this
    const planeWords = layout.blockWidth / 32
    for (const { slot, kind } of layout.constants) {
      const at = ((this.base + layout.own.values.at) >> 2) + slot * planeWords
      words.fill(kind === GateKind.Const1 ? 0xffffffff : 0, at, at + planeWords)
    }
  }

  private loadPatterns(block: number): void {
    const { layout, words, task } = this
    const { value, observed } = task.patterns
    const planeWords = layout.blockWidth / 32
    const values = (this.base + layout.own.values.at) >> 2
    const from = block * planeWords
    for (let row = 0; row < value.rows; row++) {
      const slot = layout.slotOfRow[row]
      if (slot < 0) continue
      const source = row * value.wordsPerRow + from
      const at = values + slot * planeWords
      for (let word = 0; word < planeWords; word++) words[at + word] = value.words[source + word]
    }
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
  for (const source of sources) {
    const threadFirst = new Uint32Array(memory, source.first, nClasses)
    const threadDetections = new Uint32Array(memory, source.detections, nClasses)
    for (let group = 0; group < nClasses; group++) {
      if (threadDetections[group] === 0) continue
      detections[group] += threadDetections[group]
      if (first[group] < 0 || threadFirst[group] < first[group]) first[group] = threadFirst[group]
    }
  }
  if (limit > 0)
    for (let group = 0; group < nClasses; group++) detections[group] = Math.min(limit, detections[group])
  for (const [group, same] of layout.twins) {
    first[group] = first[same]
    detections[group] = detections[same]
    possibly[group] = possibly[same]
  }
  return { nClasses, nPatterns: task.patterns.nPatterns, detectionLimit: limit, first, detections, possibly }
}
