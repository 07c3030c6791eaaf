import { GateKind, dataNets, type Circuit } from '../circuit/circuit.ts'
import { emptyPlane, type BitPlane, type PatternSet } from './pattern-set.ts'

/**
 * Values of every net under 32 patterns, one bit a pattern: known 1, known 0; neither is X. Columns have length nNets.
 */
export type NetWords = {
  readonly one: Uint32Array
  readonly zero: Uint32Array
}

export type GoodResponse = {
  /** Response rows (primary outputs, then flip-flop data): 1 where the value is known to be 1. */
  readonly one: BitPlane
  /** 1 where the value is known to be 0. */
  readonly zero: BitPlane
}

export function emptyNetWords(circuit: Circuit): NetWords {
  return { one: new Uint32Array(circuit.nNets), zero: new Uint32Array(circuit.nNets) }
}

/** Writes the values of inputs, flip-flops, constants and sources of X for patterns 32·word … 32·word + 31. */
export function loadWord(circuit: Circuit, patterns: PatternSet, word: number, nets: NetWords): void {
  const { kind, inputs, flipFlops } = circuit
  for (let net = 0; net < circuit.nNets; net++) {
    if (kind[net] === GateKind.Const0) {
      nets.one[net] = 0
      nets.zero[net] = ~0
    } else if (kind[net] === GateKind.Const1) {
      nets.one[net] = ~0
      nets.zero[net] = 0
    } else if (kind[net] === GateKind.Unknown) {
      nets.one[net] = 0
      nets.zero[net] = 0
    }
  }
  const { value, unknown } = patterns
  for (let row = 0; row < value.rows; row++) {
    const net = row < inputs.length ? inputs[row] : flipFlops[row - inputs.length]
    const known = unknown === null ? ~0 : ~unknown.words[row * unknown.wordsPerRow + word]
    const bits = value.words[row * value.wordsPerRow + word]
    nets.one[net] = bits & known
    nets.zero[net] = ~bits & known
  }
}

/** Evaluates all gates in the circuit's order, three-valued (Kleene), 32 patterns at once. */
export function evaluateWord(circuit: Circuit, nets: NetWords): void {
  const { order } = circuit
  for (let at = 0; at < order.length; at++) evaluateGate(circuit, order[at], nets)
}

/**
 * Evaluates one gate from its inputs' values into its own net. A forced pin (an index into circuit.fanin, −1 for none)
 * reads forcedOne instead of its net.
 */
export function evaluateGate(
  circuit: Circuit,
  net: number,
  nets: NetWords,
  forcedPin: number = -1,
  forcedOne: number = 0,
): void {
  const { kind, faninStart, fanin } = circuit
  const { one, zero } = nets
  const first = faninStart[net]
  const end = faninStart[net + 1]
  let resultOne = first === forcedPin ? forcedOne : one[fanin[first]]
  let resultZero = first === forcedPin ? ~forcedOne : zero[fanin[first]]
  const gate = kind[net]
  for (let at = first + 1; at < end; at++) {
    const pinOne = at === forcedPin ? forcedOne : one[fanin[at]]
    const pinZero = at === forcedPin ? ~forcedOne : zero[fanin[at]]
    if (gate === GateKind.And || gate === GateKind.Nand) {
      resultOne &= pinOne
      resultZero |= pinZero
    } else if (gate === GateKind.Or || gate === GateKind.Nor) {
      resultOne |= pinOne
      resultZero &= pinZero
    } else {
      const odd = (resultOne & pinZero) | (resultZero & pinOne)
      resultZero = (resultOne & pinOne) | (resultZero & pinZero)
      resultOne = odd
    }
  }
  const inverts =
    gate === GateKind.Not || gate === GateKind.Nand || gate === GateKind.Nor || gate === GateKind.Xnor
  one[net] = inverts ? resultZero : resultOne
  zero[net] = inverts ? resultOne : resultZero
}

/** Nets that are observed, response row by response row: primary outputs, then flip-flop data. */
export function responseNets(circuit: Circuit): Uint32Array {
  const nets = new Uint32Array(circuit.outputs.length + circuit.flipFlops.length)
  nets.set(circuit.outputs)
  nets.set(dataNets(circuit), circuit.outputs.length)
  return nets
}

/** Returns the fault-free circuit's response to every pattern. Bits past nPatterns are 0 in both planes. */
export function simulateGood(circuit: Circuit, patterns: PatternSet): GoodResponse {
  const observed = responseNets(circuit)
  const one = emptyPlane(observed.length, patterns.nPatterns)
  const zero = emptyPlane(observed.length, patterns.nPatterns)
  const nets = emptyNetWords(circuit)
  const nWords = Math.ceil(patterns.nPatterns / 32)
  for (let word = 0; word < nWords; word++) {
    loadWord(circuit, patterns, word, nets)
    evaluateWord(circuit, nets)
    const valid = validBits(patterns.nPatterns, word)
    for (let row = 0; row < observed.length; row++) {
      one.words[row * one.wordsPerRow + word] = nets.one[observed[row]] & valid
      zero.words[row * zero.wordsPerRow + word] = nets.zero[observed[row]] & valid
    }
  }
  return { one, zero }
}

/** The bits of a word that stand for patterns of the set. */
export function validBits(nPatterns: number, word: number): number {
  const left = nPatterns - 32 * word
  return left >= 32 ? ~0 : left <= 0 ? 0 : (1 << left) - 1
}
