import { GateKind, LineKind, type Circuit, type LineTable } from '../circuit/circuit.ts'

/** The lines of a netlist, with the line at each place of the circuit. */
export type NetLines = {
  readonly table: LineTable
  /** Length nNets: the row of each net's stem. */
  readonly stemOf: Uint32Array
  /** As long as circuit.fanin: the row that feeds this input pin (the stem's row where the net goes to one place). */
  readonly lineOfFanin: Uint32Array
  /** Length nNets: the row that feeds the net's primary output, −1 where it has none. */
  readonly tapOf: Int32Array
}

/**
 * Lists every line: each net's stem, then, where the net goes to two or more places, its branches: gate inputs and
 * flip-flop data pins in the order of their sinks, the primary output last.
 */
export function listLines(circuit: Circuit): NetLines {
  const { nNets, kind, faninStart, fanin, outputs } = circuit
  const destinations = new Uint32Array(nNets)
  for (const net of fanin) destinations[net]++
  for (const net of outputs) destinations[net]++

  const stemOf = new Uint32Array(nNets)
  let n = 0
  for (let net = 0; net < nNets; net++) {
    stemOf[net] = n
    n += 1 + (destinations[net] >= 2 ? destinations[net] : 0)
  }
  const lineKind = new Uint8Array(n)
  const lineNet = new Uint32Array(n)
  const sink = new Int32Array(n).fill(-1)
  const pin = new Uint32Array(n)
  for (let net = 0; net < nNets; net++) lineNet.fill(net, stemOf[net], net + 1 < nNets ? stemOf[net + 1] : n)

  const lineOfFanin = new Uint32Array(fanin.length)
  const tapOf = new Int32Array(nNets).fill(-1)
  const nextBranch = stemOf.map((row) => row + 1)
  for (let gate = 0; gate < nNets; gate++) {
    for (let at = faninStart[gate]; at < faninStart[gate + 1]; at++) {
      const net = fanin[at]
      if (destinations[net] < 2) {
        lineOfFanin[at] = stemOf[net]
        continue
      }
      const row = nextBranch[net]++
      lineOfFanin[at] = row
      lineKind[row] = kind[gate] === GateKind.FlipFlop ? LineKind.FlipFlopData : LineKind.GateInput
      sink[row] = gate
      pin[row] = at - faninStart[gate]
    }
  }
  for (const net of outputs) {
    if (destinations[net] < 2) {
      tapOf[net] = stemOf[net]
      continue
    }
    const row = nextBranch[net]++
    tapOf[net] = row
    lineKind[row] = LineKind.OutputTap
  }
  const { names } = circuit
  const nameOf = (row: number): string => {
    const net = names[lineNet[row]]
    if (lineKind[row] === LineKind.Stem) return net
    if (lineKind[row] === LineKind.OutputTap) return `${net}>@${net}`
    return `${net}>${names[sink[row]]}.${pin[row]}`
  }
  const table = { n, kind: lineKind, net: lineNet, sink, pin, byChainTest: new Uint8Array(n), nameOf }
  return { table, stemOf, lineOfFanin, tapOf }
}
