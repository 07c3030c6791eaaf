import { describe, expect, test } from 'vitest'
import { GateKind } from '../../../app/engine/circuit/circuit.ts'
import { NetGraph } from '../../../app/engine/circuit/net-graph.ts'
import { traceScanChains, type ShiftCell } from '../../../app/engine/circuit/scan-chains.ts'
import { spreadConstants, traceBack } from '../../../app/engine/circuit/scan-constants.ts'

/** A graph with a scan-in, a scan enable, a functional input, and flip-flop outputs as sources of X. */
function scanGraph(nCells: number) {
  const graph = new NetGraph()
  const [scanIn, enable, data] = [0, 1, 2].map(() => graph.gate(GateKind.Input))
  const states = Array.from({ length: nCells }, () => graph.gate(GateKind.Unknown))
  const trace = (cells: readonly ShiftCell[], outputs: readonly number[]) =>
    traceScanChains(
      graph,
      spreadConstants(graph, new Map([[enable, 1]])),
      cells,
      new Set([scanIn, data]),
      outputs,
    )
  return { graph, scanIn, enable, data, states, trace }
}

const cell = (state: number, scanIn: number, invertsScanIn = false): ShiftCell => ({
  state,
  scanIn,
  invertsScanIn,
})

// SOURCE: what a chain is (common practice, no source): each cell takes the value of the one before it.
describe('scan chains', () => {
  test('run through buffers, inverters and a multiplexer that scan enable opens, with their inversions', () => {
    const { graph, scanIn, enable, data, states, trace } = scanGraph(3)
    const [a, b, c] = states
    const inverted = graph.gate(GateKind.Not, scanIn)
    const buffered = graph.gate(GateKind.Buffer, graph.gate(GateKind.Not, a))
    const selected = graph.gate(
      GateKind.Or,
      graph.gate(GateKind.And, enable, b),
      graph.gate(GateKind.And, graph.gate(GateKind.Not, enable), data),
    )
    const output = graph.gate(GateKind.Nand, c, enable)
    const { chains, breaks } = trace(
      [cell(c, selected), cell(a, inverted), cell(b, buffered, true)],
      [data, output],
    )
    expect(breaks).toEqual([])
    expect(chains).toEqual([
      {
        scanIn,
        scanOut: output,
        cells: [1, 2, 0],
        // Into a: inverted. Into b: inverted again by the inverter and once more by the cell. Into c: straight.
        loadInverted: [true, true, true],
        // Out of c: inverted by the NAND. From b: the same; from a: two more inversions.
        unloadInverted: [true, true, true],
      },
    ])
  })

  test('inversions between cells count on one side for each cell', () => {
    const { graph, scanIn, states, trace } = scanGraph(2)
    const [a, b] = states
    const { chains } = trace([cell(a, scanIn), cell(b, graph.gate(GateKind.Not, a))], [b])
    expect(chains[0]).toMatchObject({ loadInverted: [false, true], unloadInverted: [true, false] })
  })

  test('a cell that no output shows, one that logic feeds, a ring and a fork are no chain', () => {
    const reasons = (connect: (it: ReturnType<typeof scanGraph>) => ReturnType<typeof traceScanChains>) =>
      connect(scanGraph(3)).breaks.map((each) => [each.reason, each.cells])
    expect(reasons(({ scanIn, states, trace }) => trace([cell(states[0], scanIn)], []))).toEqual([
      ['no-scan-out', [0]],
    ])
    expect(
      reasons(({ graph, scanIn, data, states: [a, b], trace }) =>
        trace([cell(a, graph.gate(GateKind.And, scanIn, data)), cell(b, a)], [b]),
      ),
    ).toEqual([['no-scan-in', [0, 1]]])
    expect(reasons(({ states: [a, b], trace }) => trace([cell(a, b), cell(b, a)], [a]))).toEqual([
      ['ring', [0, 1]],
    ])
    expect(
      reasons(({ scanIn, states: [a, b, c], trace }) =>
        trace([cell(a, scanIn), cell(b, a), cell(c, a)], [b, c]),
      ),
    ).toEqual([
      ['branch', [0]],
      ['branch', [1]],
      ['branch', [2]],
    ])
  })
})

describe('constants', () => {
  test('spread through what they decide and no further', () => {
    const { graph, scanIn, enable } = scanGraph(0)
    const one = graph.gate(GateKind.Const1)
    const nets = [
      graph.gate(GateKind.Nor, one, scanIn),
      graph.gate(GateKind.Nand, enable, one),
      graph.gate(GateKind.Xor, one, enable),
      graph.gate(GateKind.And, one, scanIn),
    ]
    const inverted = graph.gate(GateKind.Not, nets[3])
    const value = spreadConstants(graph, new Map([[enable, 1]]))
    expect(nets.map((net) => value[net])).toEqual([0, 0, 0, -1])
    expect(traceBack(graph, value, inverted)).toEqual({
      net: scanIn,
      inverted: true,
    })
  })

  test('a loop of buffers ends the walk', () => {
    const graph = new NetGraph()
    const [a, b] = [graph.addNet(), graph.addNet()]
    graph.drive(a, GateKind.Buffer, b)
    graph.drive(b, GateKind.Buffer, a)
    expect(traceBack(graph, spreadConstants(graph, new Map()), a).inverted).toBe(false)
  })
})
