import { createRandom } from '../../app/engine/source/random.ts'

export type RandomCircuitSize = {
  readonly inputs: number
  readonly gates: number
  readonly flipFlops: number
  readonly outputs: number
}

const GATES = ['AND', 'NAND', 'OR', 'NOR', 'XOR', 'XNOR', 'NOT', 'BUFF']

/** Returns the text of a random `.bench` netlist: gates of one to four inputs, constants now and then, pins that may share a net. */
export function randomBench(seed: number, size: RandomCircuitSize): string {
  const random = createRandom(seed)
  const nets = Array.from({ length: size.inputs }, (_, at) => `i${at}`)
  const lines = nets.map((net) => `INPUT(${net})`)
  for (let at = 0; at < size.flipFlops; at++) nets.push(`q${at}`)
  if (random.below(4) === 0) {
    lines.push('one = CONST1()')
    nets.push('one')
  }
  for (let at = 0; at < size.gates; at++) {
    const gate = GATES[random.below(GATES.length)] ?? 'NAND'
    const pins = gate === 'NOT' || gate === 'BUFF' ? 1 : 1 + random.below(4)
    const near = Math.max(0, nets.length - 12)
    const pick = () =>
      nets[random.below(3) === 0 ? random.below(nets.length) : near + random.below(nets.length - near)]
    lines.push(`g${at} = ${gate}(${Array.from({ length: pins }, pick).join(', ')})`)
    nets.push(`g${at}`)
  }
  const last = (count: number) => nets[nets.length - 1 - random.below(Math.min(count, nets.length))]
  for (let at = 0; at < size.flipFlops; at++) lines.push(`q${at} = DFF(${last(size.gates)})`)
  lines.push(`OUTPUT(${last(1)})`)
  for (let at = 1; at < size.outputs; at++) lines.push(`OUTPUT(${last(size.gates)})`)
  return lines.join('\n') + '\n'
}
