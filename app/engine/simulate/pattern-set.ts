/** Patterns are stored in whole blocks of this many, so that a kernel of any block width up to it divides them evenly. */
export const PATTERNS_PER_BLOCK = 512
export const WORDS_PER_BLOCK: number = PATTERNS_PER_BLOCK / 32

/**
 * Bits of `rows` signals under nPatterns patterns, row-major: pattern p of row r is bit `p & 31` of
 * `words[r * wordsPerRow + (p >> 5)]`. wordsPerRow is a multiple of WORDS_PER_BLOCK; bits past nPatterns are 0.
 * Words may live in a SharedArrayBuffer; once built nobody writes them.
 */
export type BitPlane = {
  readonly rows: number
  readonly wordsPerRow: number
  readonly words: Uint32Array
}

/** A run of consecutive patterns that the tester applies as one program block, with its own set-up. */
export type PatternBurst = {
  readonly name: string
  readonly first: number
  readonly count: number
  /** Cycles besides the patterns' own, such as the unload after the last, where the file tells them. */
  readonly onceCycles?: number
}

/**
 * A pattern set for one circuit. Input rows: primary inputs, then flip-flops, in the circuit's order. Response rows:
 * primary outputs, then flip-flop data, in the circuit's order.
 */
export type PatternSet = {
  readonly nPatterns: number
  /** Value of each input row; 0 where the value is X. */
  readonly value: BitPlane
  /** 1 where an input is X. Null: the set has no X. */
  readonly unknown: BitPlane | null
  /** What the set expects, where it says so. */
  readonly expected: ExpectedResponse | null
  /** 1 where a response row is observed in that pattern. Null: all are. */
  readonly observed: BitPlane | null
  /** Tester cycles of each pattern, 0 where the file does not say. Null: nowhere said. */
  readonly cycles: Uint32Array | null
  /** Patterns that count for time but not for coverage, 1 each (more than one capture, say). Null: none. */
  readonly timeOnly: Uint8Array | null
  /**
   * Scan patterns without a capture clock, 1 each: their unload shows what was loaded, so `expected` holds that for the
   * flip-flops and `observed` is 0 there. Null or absent: none.
   */
  readonly withoutCapture?: Uint8Array | null
  /**
   * Patterns that start from the state that the one before left, 1 each: moved elsewhere, what they expect may not hold.
   * Null or absent: none.
   */
  readonly dependsOnPrevious?: Uint8Array | null
  /** Covers all patterns in order, at least one. */
  readonly bursts: readonly PatternBurst[]
}

/** Expected values; `care` is 1 where the file expects 0 or 1, and `value` is 0 where it does not. */
export type ExpectedResponse = {
  readonly value: BitPlane
  readonly care: BitPlane
}

/** Returns an all-zero plane for that many rows and patterns. */
export function emptyPlane(rows: number, nPatterns: number): BitPlane {
  const wordsPerRow = Math.max(1, Math.ceil(nPatterns / PATTERNS_PER_BLOCK)) * WORDS_PER_BLOCK
  return { rows, wordsPerRow, words: new Uint32Array(rows * wordsPerRow) }
}

/** True where pattern p of row r is 1. */
export function bitAt(plane: BitPlane, row: number, pattern: number): boolean {
  return ((plane.words[row * plane.wordsPerRow + (pattern >>> 5)] >>> (pattern & 31)) & 1) === 1
}

/** Sets pattern p of row r to 1. For builders: a finished plane is never written. */
export function setBit(plane: BitPlane, row: number, pattern: number): void {
  plane.words[row * plane.wordsPerRow + (pattern >>> 5)] |= 1 << (pattern & 31)
}

/** Returns the plane with the bits of all patterns turned over; null where every one of them was 1. */
export function complement(plane: BitPlane, nPatterns: number): BitPlane | null {
  const words = new Uint32Array(plane.words.length)
  let any = 0
  const whole = nPatterns >>> 5
  const rest = (1 << (nPatterns & 31)) - 1
  for (let row = 0; row < plane.rows; row++) {
    const first = row * plane.wordsPerRow
    for (let word = 0; word < whole; word++) any |= words[first + word] = ~plane.words[first + word]
    if (rest !== 0) any |= words[first + whole] = ~plane.words[first + whole] & rest
  }
  return any === 0 ? null : { rows: plane.rows, wordsPerRow: plane.wordsPerRow, words }
}
