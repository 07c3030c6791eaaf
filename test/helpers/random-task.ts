import { GateKind, responseWidth, type Circuit } from '../../app/engine/circuit/circuit.ts'
import { buildFaultList } from '../../app/engine/faults/build-fault-list.ts'
import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import { emptyPlane, setBit, type BitPlane, type PatternSet } from '../../app/engine/simulate/pattern-set.ts'
import type { SimulationTask } from '../../app/engine/simulate/simulation.ts'
import { createRandom, type Random } from '../../app/engine/source/random.ts'
import { randomBench } from './random-circuit.ts'
import { randomPatterns } from './random-run.ts'

/**
 * Returns a random small circuit with random patterns and options: with and without X, masks, sources of X, patterns
 * for time only, a subset of the classes, each limit of detections.
 */
export function randomTask(seed: number): SimulationTask {
  const random = createRandom(seed)
  const size = {
    inputs: 2 + random.below(8),
    gates: 5 + random.below(60),
    flipFlops: random.below(5),
    outputs: 1 + random.below(5),
  }
  const { value } = readBench({ name: 'random.bench', text: randomBench(seed, size) })
  if (value === null) throw new Error(`the random netlist of seed ${seed} was not read`)
  const circuit = random.below(3) === 0 ? withSourcesOfX(value.circuit, random) : value.circuit
  const faults = buildFaultList(circuit)
  const nPatterns = 1 + random.below(random.below(4) === 0 ? 1200 : 200)
  const detectionLimit = [0, 0, 1, 1, 2, 5][random.below(6)] ?? 0
  const classes = Uint32Array.from({ length: faults.nClasses }, (_, group) => group)
  return {
    circuit,
    faults,
    patterns: randomOptions(randomPatterns(circuit, nPatterns, seed), circuit, random),
    detectionLimit,
    classes: random.below(3) === 0 ? classes.filter(() => random.below(2) === 0) : null,
    wantMatrix: detectionLimit === 0 && random.below(2) === 0,
  }
}

function randomOptions(patterns: PatternSet, circuit: Circuit, random: Random): PatternSet {
  const { nPatterns, value } = patterns
  const unknown =
    random.below(2) === 0 ? randomPlane(value.rows, nPatterns, 1 + random.below(20), random) : null
  return {
    ...patterns,
    value:
      unknown === null
        ? value
        : { ...value, words: value.words.map((word, at) => word & ~unknown.words[at]) },
    unknown,
    observed: random.below(3) === 0 ? randomPlane(responseWidth(circuit), nPatterns, 70, random) : null,
    timeOnly: random.below(4) === 0 ? Uint8Array.from({ length: nPatterns }, () => random.below(2)) : null,
  }
}

/** A plane of which so many bits in a hundred are 1, but in some stretches of 512 patterns none. */
function randomPlane(rows: number, nPatterns: number, percent: number, random: Random): BitPlane {
  const plane = emptyPlane(rows, nPatterns)
  for (let start = 0; start < nPatterns; start += 512) {
    if (start > 0 && random.below(3) === 0) continue
    for (let row = 0; row < rows; row++) {
      for (let pattern = start; pattern < Math.min(nPatterns, start + 512); pattern++) {
        if (random.below(100) < percent) setBit(plane, row, pattern)
      }
    }
  }
  return plane
}

/** The circuit with about one gate in ten turned into a source of X. */
function withSourcesOfX(circuit: Circuit, random: Random): Circuit {
  const cut = new Set(Array.from(circuit.order).filter(() => random.below(10) === 0))
  const kind = circuit.kind.map((gate, net) => (cut.has(net) ? GateKind.Unknown : gate))
  const faninStart = new Uint32Array(circuit.nNets + 1)
  const fanin: number[] = []
  for (let net = 0; net < circuit.nNets; net++) {
    if (!cut.has(net))
      fanin.push(...circuit.fanin.subarray(circuit.faninStart[net], circuit.faninStart[net + 1]))
    faninStart[net + 1] = fanin.length
  }
  const order = circuit.order.filter((net) => !cut.has(net))
  return { ...circuit, kind, faninStart, fanin: Uint32Array.from(fanin), order }
}
