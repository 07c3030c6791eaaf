import type { DetectionMatrix, DetectionProfile } from '../engine/simulate/detection-profile.ts'
import { emptyPlane } from '../engine/simulate/pattern-set.ts'
import type { SimulationResult } from '../engine/simulate/simulation.ts'
import { packParts, unpackParts } from './packed.ts'

/** What a stretch of a run's patterns detects; pattern numbers count from its first. Segments lie end to end. */
export type RunSegment = {
  readonly first: number
  readonly count: number
  readonly result: SimulationResult
}

const LAYOUT = 1

export function packSegment({ first, count, result }: RunSegment): Uint8Array<ArrayBuffer>[] {
  const { profile, matrix } = result
  return packParts({
    layout: LAYOUT,
    first,
    count,
    profile: { ...profile, first: unsigned(profile.first) },
    matrix: matrix === null ? null : { ...matrix, words: unshared(matrix.words) },
  })
}

/** Throws where the parts hold no segment of this layout. */
export function unpackSegment(parts: readonly Uint8Array[]): RunSegment {
  const packed = unpackParts(parts) as {
    layout: number
    first: number
    count: number
    profile: Omit<DetectionProfile, 'first'> & { first: Uint32Array }
    matrix: DetectionMatrix | null
  }
  if (packed.layout !== LAYOUT) throw new Error(`a packed segment has the layout ${packed.layout}`)
  const { first, count, profile, matrix } = packed
  return { first, count, result: { profile: { ...profile, first: signed(profile.first) }, matrix } }
}

/** Sums up what segments detect: the profile of all their patterns together. */
export class ProfileSum {
  private readonly first: Int32Array
  private readonly detections: Uint32Array
  private readonly possibly: Uint8Array
  private readonly limit: number
  private nPatterns = 0

  constructor(nClasses: number, detectionLimit: number) {
    this.first = new Int32Array(nClasses).fill(-1)
    this.detections = new Uint32Array(nClasses)
    this.possibly = new Uint8Array(nClasses)
    this.limit = detectionLimit
  }

  add({ first: start, count, result }: RunSegment): void {
    const { first, detections, possibly } = result.profile
    for (let group = 0; group < this.first.length; group++) {
      const at = first[group] ?? -1
      if (at >= 0 && (this.first[group] ?? -1) < 0) this.first[group] = start + at
      const sum = (this.detections[group] ?? 0) + (detections[group] ?? 0)
      this.detections[group] = this.limit === 0 ? sum : Math.min(sum, this.limit)
      if (possibly[group] === 1) this.possibly[group] = 1
    }
    this.nPatterns = start + count
  }

  /** Classes that need no more simulation: they have been detected as often as is counted. */
  isDone(group: number): boolean {
    return this.limit > 0 && (this.detections[group] ?? 0) >= this.limit
  }

  profile(): DetectionProfile {
    const { first, detections } = this
    return {
      nClasses: first.length,
      nPatterns: this.nPatterns,
      detectionLimit: this.limit,
      first,
      detections,
      possibly: this.possibly.map((flag, group) => ((detections[group] ?? 0) > 0 ? 0 : flag)),
    }
  }
}

/** Puts the segments' matrices side by side; null where one of them has none. */
export function joinMatrices(
  segments: readonly RunSegment[],
  profile: DetectionProfile,
): DetectionMatrix | null {
  const detected: number[] = []
  for (let group = 0; group < profile.nClasses; group++) {
    if ((profile.detections[group] ?? 0) > 0) detected.push(group)
  }
  const rowOf = new Int32Array(profile.nClasses).fill(-1)
  detected.forEach((group, row) => {
    rowOf[group] = row
  })
  const { words, wordsPerRow } = emptyPlane(detected.length, profile.nPatterns)
  for (const { first, count, result } of segments) {
    const { matrix } = result
    if (matrix === null) return null
    const used = Math.ceil(count / 32)
    matrix.classOfRow.forEach((group, from) => {
      const start = from * matrix.wordsPerRow
      words.set(matrix.words.subarray(start, start + used), (rowOf[group] ?? 0) * wordsPerRow + first / 32)
    })
  }
  return {
    nPatterns: profile.nPatterns,
    nRows: detected.length,
    wordsPerRow,
    classOfRow: Uint32Array.from(detected),
    words,
  }
}

function unsigned(column: Int32Array): Uint32Array {
  return new Uint32Array(column.buffer, column.byteOffset, column.length)
}

function signed(column: Uint32Array): Int32Array {
  return new Int32Array(column.buffer, column.byteOffset, column.length)
}

function unshared(words: Uint32Array): Uint32Array {
  return words.buffer instanceof SharedArrayBuffer ? words.slice() : words
}
