import { describe, expect, it } from 'vitest'
import { GateKind, LineKind, patternWidth, type Circuit } from '../../app/engine/circuit/circuit.ts'
import { isGate } from '../../app/engine/circuit/circuit-builder.ts'
import { buildFaultList } from '../../app/engine/faults/build-fault-list.ts'
import { listLines } from '../../app/engine/faults/list-lines.ts'
import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import { readVectors } from '../../app/engine/formats/vectors/read-vectors.ts'
import { bitAt } from '../../app/engine/simulate/pattern-set.ts'
import { simulateTwin } from '../../app/engine/simulate/twin.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import type { Source } from '../../app/engine/source/source.ts'
import { hasData, readData } from '../helpers/data.ts'
import { hasIcarus, runIcarus } from '../helpers/icarus.ts'
import { randomBench } from '../helpers/random-circuit.ts'

const PRIMITIVES: Readonly<Record<number, string>> = {
  [GateKind.Buffer]: 'buf',
  [GateKind.Not]: 'not',
  [GateKind.And]: 'and',
  [GateKind.Nand]: 'nand',
  [GateKind.Or]: 'or',
  [GateKind.Nor]: 'nor',
  [GateKind.Xor]: 'xor',
  [GateKind.Xnor]: 'xnor',
}

/**
 * Writes the circuit with a net for every line, so that each fault can be forced on its own, and a bench that prints the
 * response to every pattern: first of the good circuit, then of each faulty one.
 */
function writeBench(circuit: Circuit, patterns: string[]): string {
  const { table, stemOf, lineOfFanin, tapOf } = listLines(circuit)
  const { kind, faninStart, inputs, outputs, flipFlops } = circuit
  const text: string[] = ['module bench;', `reg [0:${patternWidth(circuit) - 1}] in;`, 'integer p;']
  text.push(`reg [0:${patternWidth(circuit) - 1}] pattern [0:${patterns.length - 1}];`)
  for (let line = 0; line < table.n; line++) text.push(`wire l${line};`)
  const sources = [...inputs, ...flipFlops]
  sources.forEach((net, row) => text.push(`assign l${stemOf[net]} = in[${row}];`))
  for (let line = 0; line < table.n; line++) {
    if (table.kind[line] !== LineKind.Stem) text.push(`assign l${line} = l${stemOf[table.net[line]]};`)
  }
  for (let net = 0; net < circuit.nNets; net++) {
    if (kind[net] === GateKind.Const0) text.push(`assign l${stemOf[net]} = 1'b0;`)
    if (kind[net] === GateKind.Const1) text.push(`assign l${stemOf[net]} = 1'b1;`)
    if (!isGate(kind[net])) continue
    const pins = Array.from(lineOfFanin.subarray(faninStart[net], faninStart[net + 1]), (line) => `l${line}`)
    text.push(`${PRIMITIVES[kind[net]]} (l${stemOf[net]}, ${pins.join(', ')});`)
  }
  const observed = [
    ...Array.from(outputs, (net) => tapOf[net]),
    ...Array.from(flipFlops, (net) => lineOfFanin[faninStart[net]]),
  ]
  text.push(
    `task apply; begin for (p = 0; p < ${patterns.length}; p = p + 1) begin`,
    `in = pattern[p]; #1 $display("%b", {${observed.map((line) => `l${line}`).join(', ')}}); end end endtask`,
    'initial begin',
    ...patterns.map((pattern, at) => `pattern[${at}] = ${pattern.length}'b${pattern.toLowerCase()};`),
    'apply;',
  )
  for (let fault = 0; fault < 2 * table.n; fault++) {
    text.push(`force l${fault >> 1} = 1'b${fault & 1}; apply; release l${fault >> 1}; #1;`)
  }
  text.push('end', 'endmodule')
  return text.join('\n')
}

function randomPatternText(width: number, count: number, seed: number, unknownShare: number): string[] {
  const random = createRandom(seed)
  return Array.from({ length: count }, () =>
    Array.from({ length: width }, () => (random.fraction() < unknownShare ? 'X' : random.below(2))).join(''),
  )
}

/** For each fault, for each pattern: D detected, P possibly, - neither. */
type Account = string[]

function byIcarus(circuit: Circuit, patterns: string[]): Account {
  const printed = runIcarus(writeBench(circuit, patterns))
  const good = printed.slice(0, patterns.length)
  const account: Account = []
  for (let from = patterns.length; from < printed.length; from += patterns.length) {
    const signs = good.map((response, pattern) => {
      const faulty = printed[from + pattern]
      let sign = '-'
      for (let at = 0; at < response.length; at++) {
        if (response[at] === 'x') continue
        if (faulty[at] === 'x') sign = sign === 'D' ? 'D' : 'P'
        else if (faulty[at] !== response[at]) sign = 'D'
      }
      return sign
    })
    account.push(signs.join(''))
  }
  return account
}

function check(source: Source, nPatterns: number, seed: number, unknownShare: number): void {
  const { circuit } = readBench(source).value!
  const faults = buildFaultList(circuit)
  const lines = randomPatternText(patternWidth(circuit), nPatterns, seed, unknownShare)
  const patterns = readVectors({ name: 'random', text: lines.join('\n') }, circuit).value!
  const task = { circuit, faults, patterns, detectionLimit: 0, classes: null, wantMatrix: true }
  const { profile, matrix } = simulateTwin(task)!
  const rowOf = new Map(Array.from(matrix!.classOfRow, (group, row) => [group, row]))
  const icarus = byIcarus(circuit, lines)
  expect(icarus.length).toBe(faults.nFaults)
  icarus.forEach((signs, fault) => {
    const group = faults.classOf[fault]
    const row = rowOf.get(group)
    const plane = { rows: matrix!.nRows, wordsPerRow: matrix!.wordsPerRow, words: matrix!.words }
    const ours = lines
      .map((_, pattern) => (row !== undefined && bitAt(plane, row, pattern) ? 'D' : '-'))
      .join('')
    expect(ours, `detections of fault ${fault}`).toBe(signs.replaceAll('P', '-'))
    expect(profile.first[group]).toBe(signs.indexOf('D'))
    expect(profile.detections[group]).toBe(signs.split('D').length - 1)
    expect(profile.possibly[group]).toBe(signs.includes('P') && !signs.includes('D') ? 1 : 0)
  })
}

// SOURCE: Icarus Verilog, a general-purpose simulator (IEEE 1364), with every fault forced in turn.
describe.skipIf(!hasIcarus)('fault by fault and pattern by pattern, Icarus Verilog agrees', () => {
  describe.skipIf(!hasData)('on the published circuits', () => {
    it.each([
      ['c17', 0],
      ['c17', 0.2],
      ['c432', 0],
      ['c432', 0.1],
    ])('%s with %d of the inputs unknown', (name, share) => {
      check(readData(`circuits/iscas85/${name}.bench`), 40, 7, share)
    })
  })

  it.each(Array.from({ length: 12 }, (_, seed) => [seed, seed % 2 === 0 ? 0 : 0.15]))(
    'on random circuit %i with %d of the inputs unknown',
    (seed, share) => {
      const size = { inputs: 6, gates: 30 + 5 * seed, flipFlops: seed % 4, outputs: 3 }
      check({ name: `random${seed}.bench`, text: randomBench(seed, size) }, 48, seed, share)
    },
  )
})
