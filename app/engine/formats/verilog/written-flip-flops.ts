import { GateKind } from '../../circuit/circuit.ts'
import type { TestPin } from '../../circuit/netlist.ts'
import { spreadConstants, traceBack } from '../../circuit/scan-constants.ts'
import { quoted } from '../../source/finding-list.ts'
import type { Assembler } from './assemble.ts'

/**
 * Gives flip-flops that are written as such their drivers. All are in the full-scan view, as in `.bench` files, if their
 * clock comes from an input through nothing but buffers and inverters; beside library cells they are on no chain, so only where the caller assumes it. One
 * whose clock is made by logic, or that takes its data at the other edge than most, is a source of X.
 */
export function placeWrittenFlipFlops(shared: Assembler, inputs: readonly number[]): void {
  const { flat, graph, unusable } = shared
  const { data: rows, length } = flat.flipFlops
  if (length === 0) return
  const clocks = findClocks(shared, inputs)
  const falling = clocks.filter((clock) => clock.port >= 0 && clock.inverted).length
  const usualInverted = falling * 2 > clocks.length
  const mayBeScanned = !shared.isMapped || shared.options.assumeScanned
  for (let at = 0; at < length; at += 5) {
    const net = shared.rootOf(rows[at + 1])
    const data = shared.rootOf(rows[at + 2])
    const [scope, place] = [rows[at + 3], rows[at + 4]]
    if (!shared.claim(net, scope, place)) continue
    const { port, inverted } = clocks[at / 5]
    if (mayBeScanned && port >= 0 && inverted === usualInverted) {
      graph.drive(net, GateKind.FlipFlop, data)
      const clock = { port: shared.netName(port), edge: inverted ? 'falling' : 'rising' } as const
      shared.flipFlops.push({ net, clock })
      continue
    }
    graph.drive(net, GateKind.Unknown)
    const row = unusable.add('unscanned flip-flop', shared.netName(net))
    row.sources.push(net)
    row.unobserved.push(data)
    if (row.count > 1) continue
    const why = !mayBeScanned
      ? 'it is on no scan chain'
      : port < 0
        ? 'its clock is made by logic'
        : 'its clock rises where that of most others falls'
    const name = quoted(shared.netName(net))
    shared.warn(
      'not-scanned',
      `flip-flop ${name} is not scanned but a source of X: ${why}`,
      null,
      scope,
      place,
    )
  }
  warnSeveralClocks(shared)
}

/** Several clocks in one pattern are taken as one pulse, which a person should know. */
function warnSeveralClocks(shared: Assembler): void {
  const ports = [...new Set(shared.flipFlops.map(({ clock }) => clock.port ?? ''))]
  if (ports.length < 2) return
  const shown = ports.slice(0, 5).join(', ')
  shared.warn(
    'ignored',
    `flip-flops have ${ports.length} clocks (${shown}): patterns are read as if all were pulsed together`,
  )
}

/** The input net that clocks each written flip-flop, −1 where there is none, and whether it arrives inverted. */
function findClocks(shared: Assembler, inputs: readonly number[]): { port: number; inverted: boolean }[] {
  const { graph, flat } = shared
  const isInput = new Set(inputs)
  const constants = spreadConstants(graph, new Map())
  const clocks: { port: number; inverted: boolean }[] = []
  for (let at = 0; at < flat.flipFlops.length; at += 5) {
    const { net, inverted } = traceBack(graph, constants, shared.rootOf(flat.flipFlops.data[at]))
    clocks.push({ port: isInput.has(net) ? net : -1, inverted })
  }
  return clocks
}

/** The clocks of a netlist of gates, which its patterns do not give, after the pins that the caller set. */
export function writtenClockPins(shared: Assembler): TestPin[] {
  const pins = [...shared.options.testPins]
  const edges = new Map(shared.flipFlops.map(({ clock }) => [clock.port ?? '', clock.edge]))
  for (const [name, edge] of edges) {
    if (pins.some((pin) => pin.name === name)) continue
    pins.push({ name, role: 'clock', value: edge === 'rising' ? 0 : 1, from: 'library' })
  }
  return pins
}
