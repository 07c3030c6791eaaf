import fc from 'fast-check'
import { expect, it } from 'vitest'
import { CircuitBuilder } from '../../app/engine/circuit/circuit-builder.ts'
import { GateKind, type Circuit } from '../../app/engine/circuit/circuit.ts'
import type { Netlist } from '../../app/engine/circuit/netlist.ts'
import { readStil } from '../../app/engine/formats/stil/read-stil.ts'
import { writeStil } from '../../app/engine/formats/stil/write-stil.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import {
  bitAt,
  emptyPlane,
  setBit,
  type BitPlane,
  type PatternSet,
} from '../../app/engine/simulate/pattern-set.ts'

type Design = { inputs: number; outputs: number; chains: { inversions: boolean[] }[] }

const designs = fc.record({
  inputs: fc.integer({ min: 0, max: 4 }),
  outputs: fc.integer({ min: 1, max: 4 }),
  // One sign for each gap of a chain: before its first cell, between cells, behind its last one.
  chains: fc.array(fc.record({ inversions: fc.array(fc.boolean(), { minLength: 2, maxLength: 7 }) }), {
    minLength: 1,
    maxLength: 3,
  }),
})

function buildNetlist({ inputs, outputs, chains }: Design, isTraced: boolean): Netlist {
  const builder = new CircuitBuilder()
  const source = builder.net('constant')
  builder.drive(source, GateKind.Const0)
  for (let at = 0; at < inputs; at++) builder.drive(builder.net(`in[${at}]`), GateKind.Input)
  const cells = chains.map(({ inversions }, chain) =>
    inversions.slice(1).map((_, cell) => {
      builder.drive(builder.net(`u${chain}/ff${cell}`), GateKind.FlipFlop, [source])
      return `u${chain}/ff${cell}`
    }),
  )
  for (let at = 0; at < outputs; at++) {
    builder.drive(builder.net(`out[${at}]`), GateKind.Buffer, [source])
    builder.observe(builder.net(`out[${at}]`))
  }
  let flipFlop = 0
  return {
    circuit: builder.finish('random') as Circuit,
    chains: !isTraced
      ? []
      : chains.map(({ inversions }, chain) => ({
          name: `chain${chain}`,
          scanIn: `si${chain}`,
          scanOut: `so${chain}`,
          cells: cells[chain].map((instance, cell) => ({
            flipFlop: flipFlop++,
            instance,
            loadInverted: inversions.slice(0, cell + 1).filter(Boolean).length % 2 === 1,
            unloadInverted: inversions.slice(cell + 1).filter(Boolean).length % 2 === 1,
          })),
        })),
    report: {
      format: 'random',
      top: 'random',
      gates: 0,
      flipFlops: flipFlop,
      lines: 0,
      cellsUsed: [],
      cellsUnknown: [],
      unusable: [],
      testPins: [],
    },
  }
}

/** Planes from random text: 0, 1 or X for each input row, then 0, 1 or X for each response row, of each pattern. */
function buildPatterns(rows: string[], inputRows: number, responseRows: number, held: boolean[]): PatternSet {
  const n = rows.length
  const plane = (first: number, count: number, wanted: RegExp): BitPlane => {
    const made = emptyPlane(count, n)
    rows.forEach((text, pattern) => {
      for (let row = 0; row < count; row++) if (wanted.test(text[first + row])) setBit(made, row, pattern)
    })
    return made
  }
  const care = plane(inputRows, responseRows, /[01]/)
  return {
    nPatterns: n,
    value: plane(0, inputRows, /1/),
    unknown: plane(0, inputRows, /X/),
    expected: { value: plane(inputRows, responseRows, /1/), care },
    observed: care,
    cycles: null,
    timeOnly: null,
    withoutCapture: Uint8Array.from(held, Number),
    bursts: [{ name: '', first: 0, count: n }],
  }
}

function textOf(patterns: PatternSet, pattern: number): string {
  const sign = (ones: BitPlane, known: (row: number) => boolean): string =>
    Array.from({ length: ones.rows }, (_, row) =>
      !known(row) ? 'X' : bitAt(ones, row, pattern) ? '1' : '0',
    ).join('')
  const { value, unknown, expected } = patterns
  return (
    sign(value, (row) => unknown === null || !bitAt(unknown, row, pattern)) +
    sign(expected!.value, (row) => bitAt(expected!.care, row, pattern))
  )
}

it('reads back every exported set, whatever the chains, their inversions and the X', () => {
  fc.assert(
    fc.property(
      designs,
      fc.integer({ min: 1, max: 600 }),
      fc.integer({ min: 0 }),
      (design, nPatterns, seed) => {
        const netlist = buildNetlist(design, true)
        const { inputs, outputs, flipFlops } = netlist.circuit
        const inputRows = inputs.length + flipFlops.length
        const responseRows = outputs.length + flipFlops.length
        const { below: next } = createRandom(seed)
        const rows = Array.from({ length: nPatterns }, () => {
          const row = Array.from({ length: inputRows + responseRows }, () => '01X'[next(3)])
          // Something must be loaded and an output compared, or a pattern shows neither capture nor look.
          row[inputs.length] = '01'[next(2)]
          row[inputRows] = '01'[next(2)]
          return row.join('')
        })
        const held = rows.map(() => next(4) === 0)
        const patterns = buildPatterns(rows, inputRows, responseRows, held)
        const sequence = Array.from({ length: nPatterns }, (_, at) => nPatterns - 1 - at)
        const text = writeStil(patterns, netlist, sequence)
        for (const reader of [netlist, buildNetlist(design, false)]) {
          const { value, diagnostics } = readStil({ name: 'export', text }, reader)
          expect(diagnostics).toEqual([])
          const back = value!.patterns
          expect(Array.from({ length: nPatterns }, (_, at) => textOf(back, at))).toEqual(
            sequence.map((at) => rows[at]),
          )
          expect(Array.from(back.withoutCapture ?? new Uint8Array(nPatterns))).toEqual(
            sequence.map((at) => Number(held[at])),
          )
        }
      },
    ),
    { numRuns: 40, seed: 20_261_201 },
  )
})
