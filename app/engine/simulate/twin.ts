import { LineKind, type Circuit, type LineTable } from '../circuit/circuit.ts'
import type { DetectionMatrix, DetectionProfile } from './detection-profile.ts'
import {
  emptyNetWords,
  evaluateGate,
  evaluateWord,
  loadWord,
  responseNets,
  validBits,
  type NetWords,
} from './good-machine.ts'
import type { BlockObserver, SimulationResult, SimulationTask } from './simulation.ts'
import { WORDS_PER_BLOCK, type PatternSet } from './pattern-set.ts'

/**
 * Simulates every fault class under every pattern the slow, obvious way: inject the fault, evaluate the whole circuit
 * three-valued, 32 patterns at once, and compare what is observed. The fast kernel must give the same result.
 * SOURCE: parallel-pattern single-fault propagation, Waicukauski et al. 1985; detection as usual: an observed output
 * has known good and faulty values that differ; possibly detected where the good value is known and the faulty one X.
 * Returns null where the observer, asked after each 32 patterns, says stop.
 */
export function simulateTwin(
  task: SimulationTask,
  onBlock: BlockObserver = () => true,
): SimulationResult | null {
  const { circuit, faults, patterns } = task
  const { lines, nClasses, representative } = faults
  const first = new Int32Array(nClasses).fill(-1)
  const detections = new Uint32Array(nClasses)
  const possibly = new Uint8Array(nClasses)
  const classes = (task.classes ?? Uint32Array.from({ length: nClasses }, (_, group) => group)).filter(
    (group) => {
      const line = representative[group] >>> 1
      return lines.byChainTest[line] === 0 && lines.kind[line] !== LineKind.Outside
    },
  )
  const rows = task.wantMatrix ? new Map<number, Uint32Array>() : null
  const nWords = Math.ceil(patterns.nPatterns / 32)
  const good = emptyNetWords(circuit)
  const faulty = emptyNetWords(circuit)
  const observation = responseNets(circuit)

  for (let word = 0; word < nWords; word++) {
    loadWord(circuit, patterns, word, good)
    evaluateWord(circuit, good)
    const valid = validBits(patterns.nPatterns, word) & ~timeOnlyBits(patterns, word)
    for (const group of classes) {
      if (task.detectionLimit > 0 && detections[group] >= task.detectionLimit) continue
      faulty.one.set(good.one)
      faulty.zero.set(good.zero)
      const response = injectFault(circuit, lines, representative[group], faulty)
      let detected = 0
      let maybe = 0
      for (let row = 0; row < observation.length; row++) {
        const net = observation[row]
        const observed = valid & observedBits(patterns, row, word)
        const faultyOne = row === response.row ? response.one : faulty.one[net]
        const faultyZero = row === response.row ? response.zero : faulty.zero[net]
        detected |= observed & ((good.one[net] & faultyZero) | (good.zero[net] & faultyOne))
        maybe |= observed & (good.one[net] | good.zero[net]) & ~(faultyOne | faultyZero)
      }
      if (maybe !== 0) possibly[group] = 1
      if (detected !== 0) countDetections(group, word, detected, task.detectionLimit, first, detections)
      if (rows !== null && detected !== 0) matrixRow(rows, group, patterns.value.wordsPerRow)[word] = detected
    }
    if (!onBlock(Math.min(patterns.nPatterns, 32 * (word + 1)))) return null
  }
  for (let group = 0; group < nClasses; group++) if (detections[group] > 0) possibly[group] = 0
  const profile: DetectionProfile = {
    nClasses,
    nPatterns: patterns.nPatterns,
    detectionLimit: task.detectionLimit,
    first,
    detections,
    possibly,
  }
  return { profile, matrix: rows === null ? null : packRows(rows, patterns) }
}

/**
 * Puts the fault into a machine that holds the good values and evaluates everything after it. A fault on a tap or a
 * flip-flop's data pin reaches one response row alone, which is returned with its value.
 */
function injectFault(
  circuit: Circuit,
  lines: LineTable,
  fault: number,
  nets: NetWords,
): { row: number; one: number; zero: number } {
  const line = fault >>> 1
  const one = fault & 1 ? ~0 : 0
  const net = lines.net[line]
  const sink = lines.sink[line]
  switch (lines.kind[line]) {
    case LineKind.OutputTap:
      return { row: circuit.outputs.indexOf(net), one, zero: ~one }
    case LineKind.FlipFlopData:
      return { row: circuit.outputs.length + circuit.flipFlops.indexOf(sink), one, zero: ~one }
    case LineKind.Stem:
      nets.one[net] = one
      nets.zero[net] = ~one
      evaluateExcept(circuit, net, nets)
      break
    default:
      evaluateGate(circuit, sink, nets, circuit.faninStart[sink] + lines.pin[line], one)
      evaluateExcept(circuit, sink, nets)
  }
  return { row: -1, one: 0, zero: 0 }
}

function evaluateExcept(circuit: Circuit, fixed: number, nets: NetWords): void {
  for (const net of circuit.order) if (net !== fixed) evaluateGate(circuit, net, nets)
}

function countDetections(
  group: number,
  word: number,
  detected: number,
  limit: number,
  first: Int32Array,
  detections: Uint32Array,
): void {
  for (let bit = 0; bit < 32; bit++) {
    if (((detected >>> bit) & 1) === 0) continue
    if (first[group] < 0) first[group] = 32 * word + bit
    detections[group]++
    if (limit > 0 && detections[group] >= limit) return
  }
}

function timeOnlyBits(patterns: PatternSet, word: number): number {
  let bits = 0
  for (let bit = 0; bit < 32; bit++) if (patterns.timeOnly?.[32 * word + bit]) bits |= 1 << bit
  return bits
}

function observedBits(patterns: PatternSet, row: number, word: number): number {
  return patterns.observed === null ? ~0 : patterns.observed.words[row * patterns.observed.wordsPerRow + word]
}

function matrixRow(rows: Map<number, Uint32Array>, group: number, wordsPerRow: number): Uint32Array {
  let row = rows.get(group)
  if (row === undefined) {
    row = new Uint32Array(wordsPerRow)
    rows.set(group, row)
  }
  return row
}

function packRows(rows: Map<number, Uint32Array>, patterns: PatternSet): DetectionMatrix {
  const wordsPerRow = Math.max(WORDS_PER_BLOCK, patterns.value.wordsPerRow)
  const classOfRow = Uint32Array.from(rows.keys()).sort()
  const words = new Uint32Array(classOfRow.length * wordsPerRow)
  classOfRow.forEach((group, row) => words.set(rows.get(group) ?? [], row * wordsPerRow))
  return { nPatterns: patterns.nPatterns, nRows: classOfRow.length, wordsPerRow, classOfRow, words }
}
