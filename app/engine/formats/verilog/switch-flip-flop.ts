import { GateKind } from '../../circuit/circuit.ts'
import { Operation, SignalFlag, type ParsedModule } from './parsed-module.ts'

type Gate = { kind: number; output: number; input: number; isUsed: boolean }
type Pass = { output: number; data: number; control: number; whenLow: boolean }

/**
 * Replaces a module's two-phase dynamic flip-flop, built of switches, by a D flip-flop of the rising edge. Returns null, or
 * the reason why the module is something else.
 *
 * The rule: two nmos or pmos switches, each the only driver of a trireg; the second passes the first one's charge on through
 * buffers and inverters; both hang on one clock, the first open while it is 0, the second while it is 1; the module
 * has nothing else but buffers and inverters on these paths. The first stores D at the rising edge, when the second opens
 * (common practice, no source).
 */
export function replaceSwitches(module: ParsedModule): string | null {
  const gates = new Map<number, Gate>()
  const passes: Pass[] = []
  const { data: items, length } = module.items
  let place = 0
  for (let at = 0; at < length;) {
    const operation = items[at]
    if (operation === Operation.Switch) {
      place = items[at + 1]
      passes.push({
        output: items[at + 2],
        data: items[at + 3],
        control: items[at + 4],
        whenLow: items[at + 5] === 1,
      })
      at += 6
    } else if (operation === Operation.Gate && items[at + 4] === 1) {
      const [kind, output, , input] = items.subarray(at + 2, at + 6)
      if (gates.has(output)) return 'a net in it has two drivers'
      gates.set(output, { kind, output, input, isUsed: false })
      at += 6
    } else return 'it holds more than two switches, buffers and inverters'
  }
  if (passes.length !== 2) return `it has ${passes.length} switches, a two-phase flip-flop has two`
  /** The end of the chain of buffers and inverters that drives a bit. */
  const follow = (from: number): { bit: number; inverted: boolean } => {
    let bit = from
    let inverted = false
    for (let gate = gates.get(bit); gate !== undefined && !gate.isUsed; gate = gates.get(bit)) {
      gate.isUsed = true
      if (gate.kind === GateKind.Not) inverted = !inverted
      bit = gate.input
    }
    return { bit, inverted }
  }
  const data = passes.map((pass) => pass.data)
  const isSecond = (pass: Pass, other: Pass): boolean => {
    let bit = pass.data
    for (let steps = gates.size; steps >= 0 && gates.has(bit); steps--) bit = gates.get(bit)?.input ?? bit
    return bit === other.output
  }
  const second = passes.find((pass, at) => isSecond(pass, passes[1 - at]))
  if (second === undefined) return 'its two switches do not stand in a row'
  const first = passes[0] === second ? passes[1] : passes[0]
  for (const pass of passes) {
    const signal = module.bitSignal.data[pass.output]
    if (signal < 0 || (module.signalFlags.data[signal] & SignalFlag.Charge) === 0) {
      return 'a switch drives a net that holds no charge (trireg)'
    }
  }
  const between = follow(second.data)
  const control = follow(first.control)
  const control2 = follow(second.control)
  if (control.bit !== control2.bit) return 'its two switches hang on different clocks'
  const openWhenLow = control.inverted !== first.whenLow
  const openWhenLow2 = control2.inverted !== second.whenLow
  if (!openWhenLow || openWhenLow2) return 'its switches are not open in turn, the first while the clock is 0'
  let output = second.output
  let inverted = between.inverted
  for (let gate = loadOf(gates, output); inverted && gate !== undefined; gate = loadOf(gates, output)) {
    gate.isUsed = true
    if (gate.kind === GateKind.Not) inverted = !inverted
    output = gate.output
  }
  if (inverted) return 'it stores the inverse of its data'
  for (const gate of gates.values()) if (!gate.isUsed) return 'a gate in it is no part of a flip-flop'
  if (data.includes(output)) return 'its output is its own data'
  module.items.length = 0
  for (const value of [Operation.FlipFlop, place, control.bit, output, first.data]) module.items.push(value)
  module.hasSwitches = false
  return null
}

/** The only buffer or inverter that a bit feeds. */
function loadOf(gates: ReadonlyMap<number, Gate>, bit: number): Gate | undefined {
  const loads = [...gates.values()].filter((gate) => gate.input === bit)
  return loads.length === 1 && !loads[0].isUsed ? loads[0] : undefined
}
