import { GateKind } from '../../circuit/circuit.ts'
import type { Assembler } from './assemble.ts'

/**
 * Returns the nets that primary outputs observe, in the order of the declarations, ports of both directions that something
 * drives last. Where two outputs are one net, or an output is an input's net, the later one gets a buffer, so that each has a net of its own name.
 */
export function observedNets(shared: Assembler): number[] {
  const { graph, flat } = shared
  const seen = new Set<number>()
  const outputs: number[] = []
  const observe = (port: number): void => {
    let net = shared.rootOf(port)
    if (seen.has(net) || graph.kind.data[net] === GateKind.Input) {
      net = graph.gate(GateKind.Buffer, net)
      shared.ownNames.set(net, flat.netText(port))
    }
    seen.add(net)
    outputs.push(net)
  }
  for (const port of flat.outputs.view()) observe(port)
  for (const port of flat.inouts.view()) {
    const net = shared.rootOf(port)
    if (graph.isDriven(net) && graph.kind.data[net] !== GateKind.Input) observe(port)
  }
  return outputs
}

/**
 * Returns the inputs that a pattern gives. In a netlist of gates with flip-flops an input that reaches nothing but clock
 * pins is none of them, as `.bench` files have no clock; that leaves out supply ports too, which reach nothing at all.
 */
export function patternInputs(
  shared: Assembler,
  inputs: readonly number[],
  outputs: readonly number[],
): readonly number[] {
  if (shared.isMapped || shared.flipFlops.length === 0) return inputs
  const { graph } = shared
  const reaches = new Uint8Array(graph.nNets)
  for (let net = 0; net < graph.nNets; net++) {
    for (let k = graph.count(net) - 1; k >= 0; k--) reaches[graph.input(net, k)] = 1
  }
  for (const net of outputs) reaches[net] = 1
  return inputs.filter((net) => reaches[net] === 1)
}
