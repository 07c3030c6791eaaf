import { CircuitBuilder } from '../engine/circuit/circuit-builder.ts'
import { GateKind, type Circuit } from '../engine/circuit/circuit.ts'
import { buildFaultList } from '../engine/faults/build-fault-list.ts'
import { emptyPlane, type PatternSet } from '../engine/simulate/pattern-set.ts'
import type { SimulationTask } from '../engine/simulate/simulation.ts'
import { createRandom, type Random } from '../engine/source/random.ts'
import { simulateInProcess } from './simulate-in-process.ts'

const MOST_MILLISECONDS = 250
const INPUTS = 64
const GATES = 600
const PATTERNS = 1024
const KINDS = [GateKind.Nand, GateKind.Nor, GateKind.And, GateKind.Or, GateKind.Not, GateKind.Xor]

/**
 * Simulates a small made circuit over and over, so that the packer and the kernel have been translated into fast machine
 * code when the first real task comes: otherwise small tasks take several times as long in a fresh process. Ends as soon
 * as `goOn`, asked every few milliseconds, says that there is something better to do.
 */
export function warmUp(wasmBytes: Uint8Array, goOn: () => boolean): void {
  const tasks = warmUpTasks()
  const end = performance.now() + MOST_MILLISECONDS
  for (let round = 0; performance.now() < end; round++) {
    if (!goOn()) return
    const task = tasks[round % tasks.length]
    if (task) simulateInProcess(wasmBytes, task)
  }
}

/** One task for each way in which the kernel works: dropping and counting, without X and with. */
function warmUpTasks(): SimulationTask[] {
  const random = createRandom(1)
  const circuit = madeCircuit(random)
  const faults = buildFaultList(circuit)
  const known = madePatterns(circuit, random, false)
  const unknown = madePatterns(circuit, random, true)
  return [known, known, unknown].flatMap((patterns) =>
    [1, 0].map((detectionLimit) => ({
      circuit,
      faults,
      patterns,
      detectionLimit,
      classes: null,
      wantMatrix: false,
    })),
  )
}

function madeCircuit(random: Random): Circuit {
  const builder = new CircuitBuilder()
  for (let at = 0; at < INPUTS; at++) builder.drive(builder.addNet(''), GateKind.Input)
  for (let at = 0; at < GATES; at++) {
    const kind = KINDS[random.below(KINDS.length)] ?? GateKind.Nand
    const nets = builder.nNets
    const pins = Array.from({ length: kind === GateKind.Not ? 1 : 2 + random.below(2) }, () =>
      random.below(4) === 0 ? random.below(nets) : nets - 1 - random.below(INPUTS),
    )
    builder.drive(builder.addNet(''), kind, pins)
  }
  for (let at = 0; at < INPUTS; at++) builder.observe(builder.nNets - 1 - at)
  const circuit = builder.finish('made')
  if (!('kind' in circuit)) throw new Error('the circuit for warming up has a fault')
  return circuit
}

function madePatterns(circuit: Circuit, random: Random, withX: boolean): PatternSet {
  const value = emptyPlane(circuit.inputs.length, PATTERNS)
  const unknown = withX ? emptyPlane(circuit.inputs.length, PATTERNS) : null
  for (let word = 0; word < value.words.length; word++) {
    const bits = unknown === null ? 0 : random.bits() & random.bits() & random.bits() & random.bits()
    if (unknown !== null) unknown.words[word] = bits
    value.words[word] = random.bits() & ~bits
  }
  const bursts = [{ name: 'made', first: 0, count: PATTERNS }]
  return {
    nPatterns: PATTERNS,
    value,
    unknown,
    expected: null,
    observed: null,
    cycles: null,
    timeOnly: null,
    bursts,
  }
}
