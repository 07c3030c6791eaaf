import type { Netlist } from '../circuit/netlist.ts'
import { countOnes } from './count-ones.ts'
import { simulateGood, validBits, type GoodResponse } from './good-machine.ts'
import type { BitPlane, PatternSet } from './pattern-set.ts'

/** How many expected values were compared, how many differ, and where the good machine has X, so that nothing is compared. */
export type ComparisonCount = {
  readonly compared: number
  readonly mismatches: number
  readonly unknown: number
}

export type Mismatch = {
  /** From 0. */
  readonly pattern: number
  /** The output's name, or the flip-flop's. */
  readonly name: string
  /** The chain and the cell's place in it, the first next to scan-in; null at outputs and where there is no chain. */
  readonly chain: { readonly name: string; readonly cell: number } | null
  readonly expected: 0 | 1
}

export type ResponseComparison = {
  readonly total: ComparisonCount
  /** Primary outputs but scan-outs, scan-outs, flip-flops after a capture, flip-flops as loaded. */
  readonly outputs: ComparisonCount
  readonly scanOuts: ComparisonCount
  readonly unloads: ComparisonCount
  readonly loads: ComparisonCount
  /** Only outputs where something was expected, in the circuit's order. */
  readonly byOutput: readonly (ComparisonCount & { readonly name: string })[]
  readonly byChain: readonly (ComparisonCount & { readonly name: string })[]
  /** Mismatches of each pattern, length nPatterns. */
  readonly byPattern: Uint32Array
  /** The first mismatches, ordered by pattern. */
  readonly first: readonly Mismatch[]
}

/** How many of the first mismatches are listed. */
const FIRST = 50

type Tally = { compared: number; mismatches: number; unknown: number }

/**
 * Compares what the patterns expect with what the fault-free circuit gives. Masked values and patterns that count for time
 * alone are left out; an unload without a capture is compared with what was loaded. `response` is the good machine's, if
 * it is at hand.
 */
export function compareResponse(
  netlist: Netlist,
  patterns: PatternSet,
  response: GoodResponse = simulateGood(netlist.circuit, patterns),
): ResponseComparison {
  const { circuit, chains } = netlist
  const { expected, observed, unknown, nPatterns } = patterns
  const nOutputs = circuit.outputs.length
  const nInputs = circuit.inputs.length
  const scanOutNames = new Set(chains.map(({ scanOut }) => scanOut))
  const { places, chainOf } = findPlaces(netlist)
  const nWords = Math.ceil(nPatterns / 32)
  const timeOnly = packFlags(patterns.timeOnly, nWords)
  const held = packFlags(patterns.withoutCapture, nWords)

  const outputs = emptyTally()
  const scanOuts = emptyTally()
  const unloads = emptyTally()
  const loads = emptyTally()
  const byOutput: (Tally & { name: string })[] = []
  const byChain = chains.map(({ name }) => ({ name, ...emptyTally() }))
  const byPattern = new Uint32Array(nPatterns)
  let first: Mismatch[] = []

  for (let row = 0; expected !== null && row < expected.care.rows; row++) {
    const flipFlop = row - nOutputs
    const name = circuit.names[flipFlop < 0 ? circuit.outputs[row] : circuit.flipFlops[flipFlop]]
    const place = flipFlop < 0 ? null : places[flipFlop]
    const group = flipFlop >= 0 ? unloads : scanOutNames.has(name) ? scanOuts : outputs
    const ofRow = emptyTally()
    for (let word = 0; word < nWords; word++) {
      const care = wordAt(expected.care, row, word) & ~timeOnly[word] & validBits(nPatterns, word)
      if (care === 0) continue
      const want = wordAt(expected.value, row, word)
      const mask = observed === null ? ~0 : wordAt(observed, row, word)
      let one = wordAt(response.one, row, word)
      let zero = wordAt(response.zero, row, word)
      let compared = care & mask
      if (flipFlop >= 0 && held[word] !== 0) {
        const known = unknown === null ? ~0 : ~wordAt(unknown, nInputs + flipFlop, word)
        const loaded = wordAt(patterns.value, nInputs + flipFlop, word)
        tally(care & held[word], known, loaded ^ want, loads, ofRow)
        one = (one & ~held[word]) | (loaded & known & held[word])
        zero = (zero & ~held[word]) | (~loaded & known & held[word])
        compared &= ~held[word]
      }
      tally(compared, one | zero, one ^ want, group, ofRow)
      let wrong = (compared | (care & held[word] & (flipFlop < 0 ? 0 : ~0))) & (one | zero) & (one ^ want)
      for (; wrong !== 0; wrong &= wrong - 1) {
        const pattern = 32 * word + 31 - Math.clz32(wrong & -wrong)
        byPattern[pattern]++
        first.push({ pattern, name, chain: place, expected: ((want >>> (pattern & 31)) & 1) === 1 ? 1 : 0 })
      }
      if (first.length > 64 * FIRST) first = earliest(first)
    }
    if (ofRow.compared + ofRow.unknown === 0) continue
    if (flipFlop < 0) byOutput.push({ name, ...ofRow })
    else if (place !== null) add(byChain[chainOf[flipFlop]], ofRow)
  }
  const total = emptyTally()
  for (const group of [outputs, scanOuts, unloads, loads]) add(total, group)
  return { total, outputs, scanOuts, unloads, loads, byOutput, byChain, byPattern, first: earliest(first) }
}

/** Where each flip-flop stands in a chain, and the chain's index; null and −1 where it is in none. */
function findPlaces({ circuit, chains }: Netlist): { places: Mismatch['chain'][]; chainOf: Int32Array } {
  const places = new Array<Mismatch['chain']>(circuit.flipFlops.length).fill(null)
  const chainOf = new Int32Array(circuit.flipFlops.length).fill(-1)
  chains.forEach(({ name, cells }, chain) => {
    cells.forEach(({ flipFlop }, cell) => {
      places[flipFlop] = { name, cell }
      chainOf[flipFlop] = chain
    })
  })
  return { places, chainOf }
}

function tally(care: number, known: number, different: number, group: Tally, row: Tally): void {
  const compared = countOnes(care & known)
  const mismatches = countOnes(care & known & different)
  const unknown = countOnes(care & ~known)
  for (const into of [group, row]) add(into, { compared, mismatches, unknown })
}

function emptyTally(): Tally {
  return { compared: 0, mismatches: 0, unknown: 0 }
}

function add(to: Tally, from: ComparisonCount): void {
  to.compared += from.compared
  to.mismatches += from.mismatches
  to.unknown += from.unknown
}

function earliest(found: Mismatch[]): Mismatch[] {
  return found.sort((a, b) => a.pattern - b.pattern).slice(0, FIRST)
}

function wordAt(plane: BitPlane, row: number, word: number): number {
  return plane.words[row * plane.wordsPerRow + word]
}

function packFlags(flags: Uint8Array | null | undefined, nWords: number): Int32Array {
  const words = new Int32Array(nWords)
  flags?.forEach((flag, pattern) => {
    if (flag === 1) words[pattern >>> 5] |= 1 << (pattern & 31)
  })
  return words
}
