import { type Circuit, GateKind, LineKind, patternWidth } from '../circuit/circuit.ts'
import type { Netlist, TestPin, UnusableKind } from '../circuit/netlist.ts'
import { buildFaultList } from '../faults/build-fault-list.ts'
import type { FaultList } from '../faults/fault-list.ts'
import { createRandom, type Random } from '../source/random.ts'
import type { DetectionProfile } from './detection-profile.ts'
import { type BitPlane, emptyPlane, PATTERNS_PER_BLOCK, type PatternSet } from './pattern-set.ts'
import type { SimulationTask } from './simulation.ts'

/** What the sources of X of a netlist cost in coverage, estimated with random patterns. */
export type UnusableCosts = {
  readonly nPatterns: number
  readonly seed: number
  /** How many uncollapsed faults were looked at: all, or a random sample of a large netlist's. */
  readonly faults: number
  /** Of those, the share that the patterns detect with the netlist as it is. */
  readonly coverage: number
  /** How much higher that share is where this kind alone is controlled and observed. */
  readonly kinds: readonly { readonly kind: UnusableKind; readonly coverage: number }[]
  /** The same where all kinds are. */
  readonly together: number
}

const N_PATTERNS = PATTERNS_PER_BLOCK
const SEED = 2026
const MOST_FAULTS = 100_000

/** What all simulations of one estimate share. */
type CostBasis = {
  readonly netlist: Netlist
  readonly faults: FaultList
  /** Faults that are looked at; ascending. */
  readonly sample: Uint32Array
  readonly patterns: PatternSet
  readonly random: Random
}

type Freed = { readonly sources: readonly number[]; readonly observed: readonly number[] }

/**
 * Estimates what each kind of source of X costs: the same random patterns are simulated on the netlist as it is, then on
 * one in which the kind's nets of X are free inputs and the nets that end at it are observed. Pins held in test keep their
 * value. Hands out one simulation after the other and takes its profile; returns null where the netlist has no such source
 * or no fault.
 * SOURCE: own method. X made known takes no detection away, so no cost is below 0; it says nothing of patterns that are
 * made for the circuit.
 */
export function* unusableCosts(
  netlist: Netlist,
  faults: FaultList,
): Generator<SimulationTask, UnusableCosts | null, DetectionProfile> {
  const { circuit, report } = netlist
  if (report.unusable.length === 0 || faults.nFaults === 0) return null
  const random = createRandom(SEED)
  const basis: CostBasis = {
    netlist,
    faults,
    sample: drawnFaults(faults, random),
    patterns: randomPatterns(circuit, report.testPins, random),
    random,
  }
  const share = (list: FaultList, { detections }: DetectionProfile): number =>
    basis.sample.reduce((sum, fault) => sum + (detections[list.classOf[fault]] > 0 ? 1 : 0), 0) /
    basis.sample.length
  const plain = taskOf(basis, circuit, faults, basis.patterns)
  const coverage = share(faults, yield plain)

  const held = new Set(report.testPins.map(({ name }) => name))
  const isHeld = new Set(circuit.inputs.filter((net) => held.has(circuit.names[net])))
  const freed: Freed[] = report.unusable.map(({ sources, unobserved }) => ({
    sources: Array.from(sources).filter((net) => circuit.kind[net] === GateKind.Unknown),
    observed: Array.from(unobserved).filter((net) => !isHeld.has(net)),
  }))
  const gains: number[] = []
  const all: Freed = {
    sources: [...new Set(freed.flatMap(({ sources }) => sources))],
    observed: [...new Set(freed.flatMap(({ observed }) => observed))],
  }
  for (const each of freed.length > 1 ? [...freed, all] : freed) {
    const usable = usableCircuit(basis, each)
    const list = buildFaultList(usable)
    const task = taskOf(basis, usable, list, widened(basis, each.sources.length))
    gains.push(share(list, yield task) - coverage)
  }
  return {
    nPatterns: N_PATTERNS,
    seed: SEED,
    faults: basis.sample.length,
    coverage,
    kinds: report.unusable.map(({ kind }, at) => ({ kind, coverage: gains[at] })),
    together: gains[gains.length - 1],
  }
}

function drawnFaults({ nFaults }: FaultList, random: Random): Uint32Array {
  const all = Uint32Array.from({ length: nFaults }, (_, fault) => fault)
  if (nFaults <= MOST_FAULTS) return all
  return all.filter(() => random.below(nFaults) < MOST_FAULTS)
}

function taskOf(
  { sample }: CostBasis,
  circuit: Circuit,
  faults: FaultList,
  patterns: PatternSet,
): SimulationTask {
  const wanted = new Uint8Array(faults.nClasses)
  for (const fault of sample) wanted[faults.classOf[fault]] = 1
  const classes = Uint32Array.from(wanted.keys()).filter((group) => wanted[group] === 1)
  return { circuit, faults, patterns, detectionLimit: 1, classes, wantMatrix: false }
}

/** The circuit with these nets of X as inputs behind its own, and these nets observed; faults stay on the lines they are on. */
function usableCircuit({ netlist: { circuit }, faults }: CostBasis, { sources, observed }: Freed): Circuit {
  const kind = circuit.kind.slice()
  for (const net of sources) kind[net] = GateKind.Input
  const isSource = new Set(sources)
  const isObserved = new Set(observed)
  const outputs = Uint32Array.from(new Set([...circuit.outputs, ...observed]))
  const { lines } = faults
  const lineKind = lines.kind.map((own, row) => {
    if (own !== LineKind.Outside) return own
    if (isObserved.has(lines.net[row])) return LineKind.OutputTap
    return isSource.has(lines.net[row]) ? LineKind.Stem : own
  })
  return {
    ...circuit,
    kind,
    inputs: Uint32Array.from([...circuit.inputs, ...sources]),
    outputs,
    pins: { ...lines, kind: lineKind },
  }
}

/** Random values for all inputs and flip-flops, with pins held in test at their value. */
function randomPatterns(circuit: Circuit, testPins: readonly TestPin[], random: Random): PatternSet {
  const value = emptyPlane(patternWidth(circuit), N_PATTERNS)
  const heldAt = new Map(testPins.map(({ name, value: held }) => [name, held]))
  for (let row = 0; row < value.rows; row++) {
    const net = row < circuit.inputs.length ? circuit.inputs[row] : -1
    const held = net < 0 ? undefined : heldAt.get(circuit.names[net])
    fillRow(value, row, held === 0 || held === 1 ? () => -held : random.bits)
  }
  return patternSetOf(value)
}

/** The same patterns for a circuit with so many inputs more, which stand between inputs and flip-flops. */
function widened({ netlist: { circuit }, patterns: { value }, random }: CostBasis, more: number): PatternSet {
  const { wordsPerRow, words } = value
  const wide = emptyPlane(value.rows + more, N_PATTERNS)
  const inputWords = circuit.inputs.length * wordsPerRow
  wide.words.set(words.subarray(0, inputWords))
  wide.words.set(words.subarray(inputWords), inputWords + more * wordsPerRow)
  for (let row = 0; row < more; row++) fillRow(wide, circuit.inputs.length + row, random.bits)
  return patternSetOf(wide)
}

function fillRow({ words, wordsPerRow }: BitPlane, row: number, bits: () => number): void {
  for (let word = 0; word < N_PATTERNS / 32; word++) words[row * wordsPerRow + word] = bits()
}

function patternSetOf(value: BitPlane): PatternSet {
  return {
    nPatterns: N_PATTERNS,
    value,
    unknown: null,
    expected: null,
    observed: null,
    cycles: null,
    timeOnly: null,
    bursts: [{ name: 'random', first: 0, count: N_PATTERNS }],
  }
}
