import type { Product } from '../quality/product.ts'
import type { PatternBurst } from '../simulate/pattern-set.ts'
import { balancedChainLength, chainTestCycles } from './scan-cycles.ts'
import { captureMHzOf, type Tester, vectorMHzOf } from './tester.ts'

/** What the time model needs to know of a pattern set. */
export type PatternFacts = {
  readonly nPatterns: number
  readonly bursts: readonly PatternBurst[]
  /** Tester cycles of each pattern, 0 where not given. Null: nowhere given. */
  readonly cycles: Uint32Array | null
}

/** What the netlist says about scan. Null where it shows no chains. */
export type ScanFacts = {
  readonly flipFlops: number
  readonly tracedChains: number | null
  readonly tracedLongest: number | null
}

/** What is measured of one burst, in place of the product's general figures. */
export type BurstMeasure = {
  readonly setupMs: number
  /** Measured ÷ computed. */
  readonly correction: number
}

/**
 * What each pattern and each burst adds to a program on one site. A program is a set of patterns: those of one burst
 * run together, so that a burst's own cycles are paid once, with its first pattern.
 *
 * A scan pattern is one load and its captures; the unload after a burst's last pattern is the burst's own. A pattern
 * that gives its cycles takes those, at the shift rate where the circuit is scanned, else at the vector rate, and a
 * burst that gives its own takes those. Cycles
 * are kept by rate and as whole numbers, so that totals carry no rounding.
 * SOURCE: Bushnell & Agrawal 2000 for overlapped load and unload (from memory); different rates are common practice.
 */
export type TimeModel = {
  readonly isScan: boolean
  readonly nPatterns: number
  readonly chains: number
  /** Bits of the longest chain; 0 where nothing is scanned. */
  readonly chainLength: number
  /** The rate of plain cycles: shift cycles where the circuit is scanned, else vectors. */
  readonly plainKHz: number
  readonly captureKHz: number
  /** Length nPatterns: the index of each pattern's burst. */
  readonly burstOf: Uint32Array
  /** Length nPatterns: cycles at the plain rate and at the capture rate. */
  readonly plainCycles: Float64Array
  readonly captureCycles: Float64Array
  /** Length nPatterns: both together, by which the orders divide gains. */
  readonly patternCycles: Float64Array
  /** Length nBursts: cycles of the unload after the last pattern, at the plain rate. */
  readonly burstCycles: Float64Array
  readonly burstSetupMs: Float64Array
  /** Length nBursts: an index into `corrections`, the distinct factors of measured over computed time. */
  readonly correctionOf: Uint32Array
  readonly corrections: Float64Array
  /** Cycles of the chain test, run once with the first pattern. */
  readonly onceCycles: number
}

/** Works out a time model; `measures` has one entry a burst, null where nothing of it was measured. */
export function buildTimeModel(
  tester: Tester,
  product: Product,
  patterns: PatternFacts,
  scan: ScanFacts,
  measures: readonly (BurstMeasure | null)[] = [],
): TimeModel {
  const isScan = scan.flipFlops > 0
  const chains = product.chains ?? scan.tracedChains ?? 1
  const chainLength = isScan ? longestChain(product, scan, chains) : 0

  const { nPatterns, bursts } = patterns
  const burstOf = new Uint32Array(nPatterns)
  const plainCycles = new Float64Array(nPatterns)
  const captureCycles = new Float64Array(nPatterns)
  const burstCycles = new Float64Array(bursts.length)
  const burstSetupMs = new Float64Array(bursts.length)
  const correctionOf = new Uint32Array(bursts.length)
  const corrections: number[] = [product.timeCorrection]
  bursts.forEach((burst, b) => {
    const measure = measures[b] ?? null
    burstSetupMs[b] = measure?.setupMs ?? product.setupMs
    const correction = measure?.correction ?? product.timeCorrection
    if (!corrections.includes(correction)) corrections.push(correction)
    correctionOf[b] = corrections.indexOf(correction)
    for (let p = burst.first; p < burst.first + burst.count; p++) {
      burstOf[p] = b
      const given = patterns.cycles === null ? 0 : patterns.cycles[p]
      if (given > 0) {
        plainCycles[p] = given
      } else if (isScan) {
        plainCycles[p] = chainLength
        captureCycles[p] = product.captureCycles
        burstCycles[b] = chainLength
      } else {
        plainCycles[p] = 1
      }
    }
    if (burst.onceCycles !== undefined) burstCycles[b] = burst.onceCycles
  })
  return {
    isScan,
    nPatterns,
    chains,
    chainLength,
    plainKHz: 1000 * (isScan ? tester.shiftMHz : vectorMHzOf(tester)),
    captureKHz: 1000 * captureMHzOf(tester),
    burstOf,
    plainCycles,
    captureCycles,
    patternCycles: plainCycles.map((cycles, p) => cycles + captureCycles[p]),
    burstCycles,
    burstSetupMs,
    correctionOf,
    corrections: Float64Array.from(corrections),
    onceCycles: isScan && product.chainTest ? chainTestCycles(chainLength) : 0,
  }
}

function longestChain(product: Product, scan: ScanFacts, chains: number): number {
  if (product.longestChain !== null) return product.longestChain
  const isAsTraced = product.chains === null || product.chains === scan.tracedChains
  if (isAsTraced && scan.tracedLongest !== null) return scan.tracedLongest
  return balancedChainLength(scan.flipFlops, chains)
}

/** Running totals of the patterns of an order; every column has length sequence.length + 1. */
export type TimeColumns = {
  readonly cycles: Float64Array
  /** On one site, set-up included, reloads not. */
  readonly milliseconds: Float64Array
  /** Cycles per pin in the vector memory, the rest of the program included. */
  readonly vectorMemory: Float64Array
  /** Cycles per pin in the scan memory; zeros where the tester has none. */
  readonly scanMemory: Float64Array
}

/**
 * Returns cycles, milliseconds on one site and memory of every prefix of a sequence of patterns, in O(n).
 * `otherCycles` is what the rest of the program holds of the vector memory.
 */
export function timeColumns(
  time: TimeModel,
  sequence: Uint32Array,
  hasScanMemory: boolean,
  otherCycles: number,
): TimeColumns {
  const n = sequence.length
  const cycles = new Float64Array(n + 1)
  const milliseconds = new Float64Array(n + 1)
  const vectorMemory = new Float64Array(n + 1)
  const scanMemory = new Float64Array(n + 1)
  const isRunning = new Uint8Array(time.burstCycles.length)
  const plain = new Float64Array(time.corrections.length)
  const capture = new Float64Array(time.corrections.length)
  const keepsScanApart = time.isScan && hasScanMemory
  let setupMs = 0
  vectorMemory[0] = otherCycles
  for (let k = 0; k < n; k++) {
    const pattern = sequence[k]
    const burst = time.burstOf[pattern]
    let addedPlain = time.plainCycles[pattern]
    if (isRunning[burst] === 0) {
      isRunning[burst] = 1
      addedPlain += time.burstCycles[burst]
      setupMs += time.burstSetupMs[burst]
    }
    if (k === 0) addedPlain += time.onceCycles
    const addedCapture = time.captureCycles[pattern]
    const group = time.correctionOf[burst]
    plain[group] += addedPlain
    capture[group] += addedCapture

    cycles[k + 1] = cycles[k] + addedPlain + addedCapture
    scanMemory[k + 1] = scanMemory[k] + (keepsScanApart ? addedPlain : 0)
    vectorMemory[k + 1] = vectorMemory[k] + addedCapture + (keepsScanApart ? 0 : addedPlain)
    let ms = setupMs
    for (let g = 0; g < plain.length; g++) {
      ms += (plain[g] / time.plainKHz + capture[g] / time.captureKHz) * time.corrections[g]
    }
    milliseconds[k + 1] = ms
  }
  return { cycles, milliseconds, vectorMemory, scanMemory }
}
