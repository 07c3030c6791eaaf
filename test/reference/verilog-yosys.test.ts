import { describe, expect, test } from 'vitest'
import type { Circuit } from '../../app/engine/circuit/circuit.ts'
import type { CellLibrary } from '../../app/engine/circuit/cell-library.ts'
import type { Netlist } from '../../app/engine/circuit/netlist.ts'
import { readLiberty } from '../../app/engine/formats/liberty/read-liberty.ts'
import { readVerilog } from '../../app/engine/formats/verilog/read-verilog.ts'
import { emptyNetWords, evaluateWord } from '../../app/engine/simulate/good-machine.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import { evaluateAiger, parseAiger, type AndInverterGraph } from '../helpers/aiger.ts'
import { hasData, readData } from '../helpers/data.ts'
import { yosys } from '../helpers/yosys.ts'

// SOURCE of every expectation here: Yosys 0.55, which reads the same files and maps them to an and-inverter graph; the
// graph is evaluated on random patterns of inputs and flip-flops, and outputs and next states are compared by name.

const ROUNDS = 8

/** Yosys' commands from the netlist that was read to one graph file. */
const toGraph = (name: string): string => `hierarchy -auto-top
proc
flatten
dffunmap
simplemap
aigmap
opt_clean
write_aiger -ascii -symbols ${name}.aag
`

/** One graph for each netlist, from one start of Yosys. */
async function readByYosys(
  netlists: Record<string, string>,
  liberty: string | null,
): Promise<Map<string, AndInverterGraph>> {
  const files: Record<string, string> = { ...netlists }
  let script = ''
  if (liberty !== null) {
    files['cells.lib'] = liberty
    script += 'read_liberty -ignore_miss_func -ignore_miss_dir cells.lib\n'
  }
  script += 'design -save empty\n'
  for (const name of Object.keys(netlists))
    script += `design -load empty\nread_verilog ${name}\n${toGraph(name)}`
  const file = await yosys(script, files)
  return new Map(Object.keys(netlists).map((name) => [name, parseAiger(file(`${name}.aag`))]))
}

/**
 * Compares known values of the good machine with the graph's, 32 patterns at a time; pins that are held in test have their
 * value. Returns how many bits were compared and the names of those that differ.
 */
function compare(netlist: Netlist, graph: AndInverterGraph): { compared: number; differing: Set<string> } {
  const { circuit, report } = netlist
  const random = createRandom(1)
  const held = new Map(report.testPins.map((pin) => [pin.name, pin.value]))
  const latchOf = latchesByName(graph)
  const latches = Array.from(circuit.flipFlops, (net) => latchOf(circuit.names[net]))
  const found = latches.filter((latch) => latch >= 0).length
  expect(found, 'Yosys leaves out flip-flops that reach nothing').toBeGreaterThan(latches.length * 0.9 - 1)
  const inputOf = new Map(Array.from(circuit.inputs, (net) => [circuit.names[net], net]))
  const outputOf = new Map(Array.from(circuit.outputs, (net) => [circuit.names[net], net]))
  const differing = new Set<string>()
  let compared = 0
  for (let round = 0; round < ROUNDS; round++) {
    const nets = emptyNetWords(circuit)
    const words = graph.inputs.map((_, at) => {
      const name = graph.inputNames[at]
      const fixed = held.get(name)
      return fixed === 0 || fixed === 1 ? -fixed : random.bits() | 0
    })
    const set = (net: number, word: number): void => {
      nets.one[net] = word
      nets.zero[net] = ~word
    }
    graph.inputNames.forEach((name, at) => {
      const net = inputOf.get(name)
      if (net !== undefined) set(net, words[at])
    })
    const state = graph.latches.map(() => random.bits() | 0)
    circuit.flipFlops.forEach((net, at) => set(net, state[latches[at]] ?? 0))
    setConstants(circuit, nets)
    evaluateWord(circuit, nets)
    const expected = evaluateAiger(graph, [...words, ...state])
    const check = (name: string, net: number, word: number): void => {
      const known = nets.one[net] | nets.zero[net]
      compared += popCount(known)
      if (((nets.one[net] ^ word) & known) !== 0) differing.add(name)
    }
    graph.outputNames.forEach((names, at) => {
      for (const name of names.split(' ')) {
        const net = outputOf.get(name)
        if (net !== undefined) check(name, net, expected[at])
      }
    })
    circuit.flipFlops.forEach((net, at) => {
      if (latches[at] < 0) return
      const data = circuit.fanin[circuit.faninStart[net]]
      check(`next ${circuit.names[net]}`, data, expected[graph.outputs.length + latches[at]])
    })
  }
  return { compared, differing }
}

function setConstants(circuit: Circuit, nets: ReturnType<typeof emptyNetWords>): void {
  circuit.kind.forEach((kind, net) => {
    if (kind === 2) nets.zero[net] = ~0
    else if (kind === 3) nets.one[net] = ~0
  })
}

/** A latch by a net's name or by that of the cell instance which holds it; −1 where there is none. */
function latchesByName(graph: AndInverterGraph): (name: string) => number {
  const byName = new Map<string, number>()
  graph.latchNames.forEach((names, at) => {
    for (const name of names.split(' ')) {
      byName.set(name, at)
      if (/\.IQN?\d*$/.test(name)) byName.set(name.slice(0, name.lastIndexOf('.')), at)
    }
  })
  return (name) => byName.get(name) ?? byName.get(name.replaceAll('/', '.')) ?? -1
}

function popCount(word: number): number {
  let count = 0
  for (let left = word; left !== 0; left &= left - 1) count++
  return count
}

function check(name: string, text: string, libraries: readonly CellLibrary[], graph: AndInverterGraph): void {
  const { value, diagnostics } = readVerilog([{ name, text }], { libraries, assumeScanned: true })
  expect(diagnostics.filter((each) => each.severity === 'error')).toEqual([])
  if (value === null) throw new Error('no netlist')
  const { compared, differing } = compare(value, graph)
  expect([...differing].slice(0, 10)).toEqual([])
  const bits = value.circuit.outputs.length + value.circuit.flipFlops.length
  expect(compared, 'most values are known').toBeGreaterThan(bits * 32 * ROUNDS * 0.8)
}

describe.skipIf(!hasData)('the good machine agrees with Yosys', () => {
  const GATES = [
    ...['c17', 'c432', 'c499', 'c880', 'c1355', 'c1908', 'c2670', 'c5315', 'c6288'].map(
      (name) => `iscas85/${name}`,
    ),
    ...['s27', 's382', 's420', 's1423', 's5378', 's13207'].map((name) => `iscas89/${name}`),
    ...['ctrl', 'int2float', 'router', 'cavlc', 'dec', 'priority', 'i2c', 'bar', 'max'].map(
      (name) => `epfl/${name}`,
    ),
  ]

  test('on netlists of gates', { timeout: 120_000 }, async () => {
    const texts = Object.fromEntries(
      GATES.map((path) => [`${path.replace('/', '_')}.v`, readData(`circuits/${path}.v`).text]),
    )
    const graphs = await readByYosys(texts, null)
    for (const [name, graph] of graphs) check(name, texts[name], [], graph)
    expect(graphs.size).toBe(GATES.length)
  })

  // Our own text, for what no open netlist uses. Ports count from 0, since the graph's names do.
  const CONSTRUCTS = `
    module leaf #(parameter W = 4) (input [W-1:0] a, input s, output [0:W-1] y, output reg q, input ck);
      wire [0:3] low; supply1 one;
      assign low = s ? a : ~a, y = {low[2:3], a[1 +: 2]} ^ {2{s, one}};
      always @(posedge ck) begin q <= ^a & (s ~^ y[0]); end
    endmodule
    module top (ck, \\in.0 , cc, dd, q, bus, f, g);
      input ck, \\in.0 ; input [3:0] cc; input [2:0] dd; output [1:0] q; output [5:0] bus; output f, g;
      wire [7:4] c = cc; wire [0:2] d; assign d = dd; wire [3:0] m, n;
      leaf u0 (.a(c), .s(\\in.0 ), .y(m), .q(q[0]), .ck(ck)), u1 (.ck(ck), .a({d, c[4]}), .s(c[7]), .y(n), .q(q[1]));
      assign bus[5:2] = m & ~n | {4{d[1]}}, {bus[0], bus[1]} = {d == 3'd5, c != {d, 1'b1}};
      assign f = !c || (&d && |m) ? ~|n : c[6] ? ~&m : 1'b0;
      nor #(1:2:3) (g, f, n[0], \\in.0 );
    endmodule
  `

  test('on hierarchy, vectors, selects and every operator', { timeout: 60_000 }, async () => {
    const graphs = await readByYosys({ 'own.v': CONSTRUCTS }, null)
    const graph = graphs.get('own.v')
    if (graph === undefined) throw new Error('no graph')
    check('own.v', CONSTRUCTS, [], graph)
    // The check can fail: with one operator changed it does.
    const changed = readVerilog([{ name: 'own.v', text: CONSTRUCTS.replace('m & ~n', 'm | ~n') }]).value
    expect(changed && compare(changed, graph).differing.size).toBeGreaterThan(0)
  })

  const MAPPED: readonly (readonly [string, readonly string[]])[] = [
    ['scan_gates.lib', ['s27_scan.v', 's15850_scan1.v', 's13207_scan10.v']],
    ['toy_cells.lib', ['toy_counter.v']],
    [
      'sg13g2_stdcell_typ_1p20V_25C.lib',
      ['sg13g2_daosvik_aesinvsbox.v', 'sg13g2_couchand_cora16.v', 'sg13g2_devinatkin_basys3_uart.v'],
    ],
    ['gf180mcu_7t_tt_025C_3v30.functional.lib', ['gf180_rejunity_sn76489.v']],
  ]

  test.each(MAPPED)('on netlists mapped to %s', { timeout: 120_000 }, async (libraryName, names) => {
    const source = readData(`mapped/${libraryName}`)
    const library = readLiberty(source).value
    if (library === null) throw new Error('no library')
    // Resets are held off in the patterns; without them Yosys keeps each flip-flop's name. Yosys knows neither text outside
    // the library group nor lists of pins.
    const liberty = source.text
      .slice(source.text.search(/^library/m))
      .replaceAll(/^(\s*(?:ff.*)?)(clear|preset|clear_preset_var\d)\s*:[^;]*;/gm, '$1')
      .replaceAll(/ (clear|preset): "[^"]*";/g, '')
      .replaceAll(/pin\((\w+), (\w+)\) (\{[^}]*\})/g, 'pin($1) $3 pin($2) $3')
    const texts = Object.fromEntries(names.map((name) => [name, readData(`mapped/${name}`).text]))
    const graphs = await readByYosys(texts, liberty)
    for (const [name, graph] of graphs) check(name, texts[name], [library], graph)
    expect(graphs.size).toBe(names.length)
  })
})
