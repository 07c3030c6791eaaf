import {
  complement,
  emptyPlane,
  setBit,
  type BitPlane,
  type PatternBurst,
  type PatternSet,
} from './pattern-set.ts'

/** Collects patterns one after the other, row by row of one pattern, and finishes them into a PatternSet. */
export class PatternSetBuilder {
  private readonly inputRows: number
  private readonly responseRows: number
  private readonly value: BitPlane
  private unknown: BitPlane | null = null
  private expected: { value: BitPlane; care: BitPlane } | null = null
  private masked: BitPlane | null = null
  private cycles: Uint32Array | null = null
  private readonly capacity: number
  private count = 0

  /** `capacity`: at most this many patterns will come. */
  constructor(inputRows: number, responseRows: number, capacity: number) {
    this.inputRows = inputRows
    this.responseRows = responseRows
    this.capacity = capacity
    this.value = emptyPlane(inputRows, capacity)
  }

  get nPatterns(): number {
    return this.count
  }

  setInput(row: number, value: 1 | 'X'): void {
    if (value === 1) return setBit(this.value, row, this.count)
    this.unknown ??= emptyPlane(this.inputRows, this.capacity)
    setBit(this.unknown, row, this.count)
  }

  /** The values of one row in the next 32 patterns, one a bit; so far whole words must be filled. */
  setInputs(row: number, ones: number, unknown: number): void {
    const word = row * this.value.wordsPerRow + (this.count >>> 5)
    this.value.words[word] = ones
    if (unknown === 0) return
    this.unknown ??= emptyPlane(this.inputRows, this.capacity)
    this.unknown.words[word] = unknown
  }

  expect(row: number, value: 0 | 1): void {
    this.expected ??= {
      value: emptyPlane(this.responseRows, this.capacity),
      care: emptyPlane(this.responseRows, this.capacity),
    }
    setBit(this.expected.care, row, this.count)
    if (value === 1) setBit(this.expected.value, row, this.count)
  }

  /** Takes a response row out of what this pattern observes. */
  mask(row: number): void {
    this.masked ??= emptyPlane(this.responseRows, this.capacity)
    setBit(this.masked, row, this.count)
  }

  setCycles(cycles: number): void {
    this.cycles ??= new Uint32Array(this.capacity)
    this.cycles[this.count] = cycles
  }

  endPattern(): void {
    this.count++
  }

  endPatterns(count: number): void {
    this.count += count
  }

  finish(burst: string): PatternSet {
    const n = this.count
    return {
      nPatterns: n,
      value: trimmed(this.value, n),
      unknown: this.unknown && trimmed(this.unknown, n),
      expected: this.expected && {
        value: trimmed(this.expected.value, n),
        care: trimmed(this.expected.care, n),
      },
      observed: this.masked && (complement(trimmed(this.masked, n), n) ?? emptyPlane(this.responseRows, n)),
      cycles: this.cycles && this.cycles.slice(0, n),
      timeOnly: null,
      bursts: [{ name: burst, first: 0, count: n }],
    }
  }
}

/** The plane with no more words a row than that many patterns need. */
function trimmed(plane: BitPlane, nPatterns: number): BitPlane {
  const fitting = emptyPlane(0, nPatterns)
  if (fitting.wordsPerRow === plane.wordsPerRow) return plane
  const smaller = emptyPlane(plane.rows, nPatterns)
  copyBits(plane, nPatterns, smaller, 0)
  return smaller
}

/** Writes the first nPatterns patterns of one plane into another of as many rows, from pattern `at` on; bits there are 0. */
function copyBits(from: BitPlane, nPatterns: number, to: BitPlane, at: number): void {
  const shift = at & 31
  const nWords = Math.ceil(nPatterns / 32)
  for (let row = 0; row < from.rows; row++) {
    const source = row * from.wordsPerRow
    const target = row * to.wordsPerRow + (at >>> 5)
    for (let word = 0; word < nWords; word++) {
      const bits = from.words[source + word]
      to.words[target + word] |= bits << shift
      if (shift > 0 && bits >>> (32 - shift) !== 0) to.words[target + word + 1] |= bits >>> (32 - shift)
    }
  }
}

/** Joins pattern sets of one circuit end to end; the bursts stay apart. */
export function joinPatternSets(sets: readonly PatternSet[]): PatternSet {
  const [only, ...others] = sets
  if (others.length === 0) return only
  const nPatterns = sets.reduce((sum, set) => sum + set.nPatterns, 0)
  const firsts: number[] = []
  let next = 0
  for (const set of sets) {
    firsts.push(next)
    next += set.nPatterns
  }
  const joinPlanes = (
    planeOf: (set: PatternSet) => BitPlane | null,
    whereAbsent: 0 | 1 = 0,
  ): BitPlane | null => {
    const rows = sets.map(planeOf).find((plane) => plane !== null)?.rows
    if (rows === undefined) return null
    const joined = emptyPlane(rows, nPatterns)
    sets.forEach((set, index) => {
      const plane = planeOf(set)
      if (plane !== null) return copyBits(plane, set.nPatterns, joined, firsts[index])
      if (whereAbsent === 0) return
      for (let row = 0; row < rows; row++) {
        for (let p = 0; p < set.nPatterns; p++) setBit(joined, row, firsts[index] + p)
      }
    })
    return joined
  }
  const joinColumns = <T extends Uint8Array | Uint32Array>(
    make: () => T,
    columnOf: (set: PatternSet) => T | null | undefined,
  ): T | null => {
    if (sets.every((set) => !columnOf(set))) return null
    const joined = make()
    sets.forEach((set, index) => joined.set(columnOf(set) ?? [], firsts[index]))
    return joined
  }
  const expectedValue = joinPlanes((set) => set.expected?.value ?? null)
  const expectedCare = joinPlanes((set) => set.expected?.care ?? null)
  const bursts: PatternBurst[] = sets.flatMap((set, index) =>
    set.bursts.map((burst) => ({ ...burst, first: burst.first + firsts[index] })),
  )
  return {
    nPatterns,
    value: joinPlanes((set) => set.value) ?? only.value,
    unknown: joinPlanes((set) => set.unknown),
    expected: expectedValue && expectedCare && { value: expectedValue, care: expectedCare },
    observed: joinPlanes((set) => set.observed, 1),
    cycles: joinColumns(
      () => new Uint32Array(nPatterns),
      (set) => set.cycles,
    ),
    timeOnly: joinColumns(
      () => new Uint8Array(nPatterns),
      (set) => set.timeOnly,
    ),
    withoutCapture: joinColumns(
      () => new Uint8Array(nPatterns),
      (set) => set.withoutCapture,
    ),
    dependsOnPrevious: joinColumns(
      () => new Uint8Array(nPatterns),
      (set) => set.dependsOnPrevious,
    ),
    bursts,
  }
}
