import { FlatNet, type FlatNetlist } from './flat-netlist.ts'

/**
 * Returns, for each flat net, the net that stands for it once plain assignments are taken as wires: in a mapped netlist
 * they are no cells. A port of the top keeps its own net; two ports are never one net, a buffer is put between them.
 */
export function findAliases(flat: FlatNetlist): Int32Array {
  const root = Int32Array.from({ length: flat.nNets }, (_, net) => net)
  const isPort = new Uint8Array(flat.nNets)
  for (const list of [flat.inputs, flat.outputs, flat.inouts]) for (const net of list.view()) isPort[net] = 1
  const find = (net: number): number => {
    let at = net
    while (root[at] !== at) at = root[at] = root[root[at]]
    return at
  }
  for (let at = 0; at < flat.connects.length; at += 4) {
    const to = find(flat.connects.data[at])
    const from = find(flat.connects.data[at + 1])
    if (to === from || from <= FlatNet.Unknown || to <= FlatNet.Unknown) continue
    if (isPort[to] === 1 && isPort[from] === 1) continue
    if (isPort[to] === 1 || (isPort[from] === 0 && to < from)) root[from] = to
    else root[to] = from
  }
  for (let net = 0; net < flat.nNets; net++) root[net] = find(net)
  return root
}
