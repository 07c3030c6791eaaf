import { describe, expect, test } from 'vitest'
import type { CellLibrary } from '../../app/engine/circuit/cell-library.ts'
import type { Netlist } from '../../app/engine/circuit/netlist.ts'
import { buildFaultList } from '../../app/engine/faults/build-fault-list.ts'
import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import { readLiberty } from '../../app/engine/formats/liberty/read-liberty.ts'
import { readVerilog, type VerilogOptions } from '../../app/engine/formats/verilog/read-verilog.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import { emptyNetWords, evaluateWord } from '../../app/engine/simulate/good-machine.ts'
import { simulateTwin } from '../../app/engine/simulate/twin.ts'
import { hasData, readData } from '../helpers/data.ts'
import { randomPatterns } from '../helpers/random-run.ts'

// SOURCE: the tables of the data folder's README.md, counted by an independent script and compared there with the
// published ones (Brglez & Fujiwara 1985; Brglez, Bryan & Kozminski 1989; Amaru, Gaillardon & De Micheli 2015).

/** Rows of the table below a heading: file name, then the columns as numbers. */
function tableRows(heading: string): { file: string; columns: number[] }[] {
  const text = readData('README.md').text
  const section = text.slice(text.indexOf(`### ${heading}`)).split('\n###')[0]
  return section
    .split('\n')
    .map((line) => line.split('|').map((cell) => cell.trim()))
    .filter((cells) => /\.(v|bench)$/.test(cells[1] ?? ''))
    .map((cells) => ({ file: cells[1], columns: cells.slice(2, -1).map((cell) => parseInt(cell)) }))
}

function read(path: string, options: VerilogOptions = {}): Netlist {
  const { value, diagnostics } = readVerilog([readData(path)], options)
  expect(diagnostics.filter((each) => each.severity === 'error')).toEqual([])
  if (value === null) throw new Error(`${path} does not read`)
  return value
}

function readLibrary(name: string): CellLibrary {
  const library = readLiberty(readData(`mapped/${name}`)).value
  if (library === null) throw new Error(`${name} does not read`)
  return library
}

describe.skipIf(!hasData)('netlists of gates', () => {
  /** Verilog file and the `.bench` file of the same circuit. */
  const TWINS: readonly (readonly [string, string])[] = [
    ...['c17', 'c432', 'c499', 'c880', 'c1355', 'c1908', 'c5315', 'c6288'].map(
      (name) => [`iscas85/${name}`, `iscas85/${name}`] as const,
    ),
    ...['s27', 's298', 's344', 's382', 's1423', 's5378', 's35932'].map(
      (name) => [`iscas89/${name}`, `iscas89/${name}`] as const,
    ),
    ...['s420', 's838', 's13207', 's38584'].map((name) => [`iscas89/${name}`, `iscas89/${name}.1`] as const),
  ]

  test.each(TWINS)(
    '%s.v has the counts, the lines and the collapsed faults of %s.bench',
    (verilog, bench) => {
      const counts = ({ circuit, report }: Netlist) => ({
        inputs: circuit.inputs.length,
        outputs: circuit.outputs.length,
        flipFlops: circuit.flipFlops.length,
        gates: report.gates,
        lines: report.lines,
        collapsed: buildFaultList(circuit).nClasses,
      })
      const twin = readBench(readData(`circuits/${bench}.bench`)).value
      if (twin === null) throw new Error(`${bench} does not read`)
      const found = counts(read(`circuits/${verilog}.v`))
      expect(found).toEqual(counts(twin))
      const [folder, file] = `${bench}.bench`.split('/')
      const row = tableRows(`circuits/${folder}`).find((each) => each.file === file)
      expect([found.inputs, found.outputs, found.flipFlops, found.gates]).toEqual(row?.columns.slice(0, 4))
    },
  )

  test('lines have the names of the .bench file where nets have', () => {
    const names = ({ circuit }: Netlist): string[] => {
      const { lines } = buildFaultList(circuit)
      return Array.from({ length: lines.n }, (_, row) => lines.nameOf(row)).sort()
    }
    for (const [verilog, bench] of [
      ['s27', 's27'],
      ['s13207', 's13207.1'],
    ]) {
      const twin = readBench(readData(`circuits/iscas89/${bench}.bench`)).value
      if (twin === null) throw new Error(`${bench} does not read`)
      expect(names(read(`circuits/iscas89/${verilog}.v`))).toEqual(names(twin))
    }
  })

  // SOURCE: the README's oddities: 76 more buffers; one more inverter, on an undriven net; dff not defined.
  test('c2670.v, s400.v and s953.v read with their oddities', () => {
    const c2670 = read('circuits/iscas85/c2670.v')
    expect([c2670.circuit.inputs.length, c2670.circuit.outputs.length, c2670.report.gates]).toEqual([
      233, 140, 1269,
    ])
    const s400 = read('circuits/iscas89/s400.v')
    expect([s400.circuit.inputs.length, s400.circuit.flipFlops.length, s400.report.gates]).toEqual([
      3, 21, 163,
    ])
    expect(s400.report.unusable).toMatchObject([{ kind: 'undriven net', count: 1, examples: ['Phi1H'] }])
    const s953 = read('circuits/iscas89/s953.v')
    expect(s953.report).toMatchObject({ gates: 395, cellsUnknown: [{ cell: 'dff', count: 29 }] })
    expect(s953.report.unusable).toMatchObject([{ kind: 'black box', count: 29 }])
  })

  test('the EPFL circuits have the inputs, outputs and operators of the table', () => {
    const rows = tableRows('circuits/epfl')
    expect(rows).toHaveLength(17)
    for (const { file, columns } of rows) {
      const { circuit } = read(`circuits/epfl/${file}`)
      const operators = circuit.kind.filter((kind) => kind >= 7).length
      expect([file, circuit.inputs.length, circuit.outputs.length, operators]).toEqual([
        file,
        columns[0],
        columns[1],
        columns[3],
      ])
    }
  })
})

describe.skipIf(!hasData)(
  'arithmetic circuits compute what the README says they were checked against',
  () => {
    /** Sets each operand's bits, low first, and returns a reader of a result's bits, for one pattern. */
    function evaluate(file: string, operands: Record<string, bigint>): (result: string) => bigint {
      const { circuit } = read(`circuits/epfl/${file}`)
      const netOf = new Map(circuit.names.map((name, net) => [name, net]))
      const nets = emptyNetWords(circuit)
      for (const net of circuit.inputs) {
        const [, name, bit] = /^(\w+)\[(\d+)\]$/.exec(circuit.names[net]) ?? []
        const isSet = ((operands[name] >> BigInt(bit)) & 1n) === 1n
        nets.one[net] = isSet ? ~0 : 0
        nets.zero[net] = isSet ? 0 : ~0
      }
      evaluateWord(circuit, nets)
      return (result) => {
        let value = 0n
        for (let bit = 0; ; bit++) {
          const net = netOf.get(`${result}[${bit}]`)
          if (net === undefined) return value
          if ((nets.one[net] & 1) === 1) value |= 1n << BigInt(bit)
        }
      }
    }
    const random = createRandom(5)
    const draw = (bits: number): bigint => {
      let value = 0n
      for (let at = 0; at < bits; at += 32) value = (value << 32n) | BigInt(random.bits())
      return BigInt.asUintN(bits, value)
    }

    test('adder.v adds, multiplier.v multiplies, sqrt.v takes the root', () => {
      const [a, b] = [draw(128), draw(128)]
      expect(evaluate('adder.v', { a, b })('f')).toBe(BigInt.asUintN(128, a + b))
      const [c, d] = [draw(64), draw(64)]
      expect(evaluate('multiplier.v', { a: c, b: d })('f')).toBe(c * d)
      const root = evaluate('sqrt.v', { a })('asqrt')
      expect(root * root <= a && (root + 1n) * (root + 1n) > a).toBe(true)
    })

    test('div.v divides', () => {
      const [a, b] = [draw(64), draw(40)]
      const result = evaluate('div.v', { a, b })
      expect([result('quotient'), result('remainder')]).toEqual([a / b, a % b])
    })
  },
)

describe.skipIf(!hasData)('coverage', () => {
  test('is the same for the Verilog and the .bench file of a circuit', () => {
    for (const path of ['iscas85/c432', 'iscas89/s298', 'iscas89/s382', 'iscas89/s1423']) {
      const bench = readBench(readData(`circuits/${path}.bench`)).value
      if (bench === null) throw new Error(`${path} does not read`)
      const detected = [read(`circuits/${path}.v`), bench].map(({ circuit }) => {
        const faults = buildFaultList(circuit)
        const patterns = randomPatterns(circuit, 64, 3)
        const task = { circuit, faults, patterns, detectionLimit: 1, classes: null, wantMatrix: false }
        const first = simulateTwin(task)?.profile.first ?? new Int32Array()
        return first.reduce((sum, at, group) => (at >= 0 ? sum + faults.classSize[group] : sum), 0)
      })
      expect(detected[0], path).toBe(detected[1])
      expect(detected[0]).toBeGreaterThan(0)
    }
  })
})

describe.skipIf(!hasData)('mapped netlists', () => {
  const LIBRARIES: Record<string, string> = {
    sg13g2: 'sg13g2_stdcell_typ_1p20V_25C.lib',
    gf180: 'gf180mcu_7t_tt_025C_3v30.functional.lib',
    toy: 'toy_cells.lib',
  }

  test('the libraries have the cells that the README counts', () => {
    const count = (name: string) => {
      const { cells } = readLibrary(name)
      const of = (kind: string): number => cells.filter((cell) => cell.kind === kind).length
      const scan = cells.filter((cell) => cell.scan !== null).length
      return {
        cells: cells.length,
        flipFlops: of('flip-flop'),
        scan,
        latches: of('latch'),
        gates: of('clock gate'),
      }
    }
    expect(count(LIBRARIES.sg13g2)).toMatchObject({ cells: 84, scan: 5 })
    expect(count(LIBRARIES.gf180)).toEqual({ cells: 229, flipFlops: 36, scan: 12, latches: 12, gates: 6 })
    expect(count('scan_gates.lib')).toMatchObject({ cells: 7, flipFlops: 1, scan: 1 })
    expect(count('toy_cells.lib')).toMatchObject({ cells: 8, flipFlops: 1, scan: 0 })
  })

  test('every netlist has the counts of the table', { timeout: 60_000 }, () => {
    const rows = tableRows('mapped netlists')
    expect(rows).toHaveLength(12)
    for (const { file, columns } of rows) {
      const library = readLibrary(LIBRARIES[file.split('_')[0]] ?? 'scan_gates.lib')
      const kindOf = new Map(
        library.cells.map((cell) => {
          // The table's column counts what fills space; a bus holder has nothing to test either but is not among it.
          const isHolder = cell.pins.some((pin) => pin.isBusHold)
          return [cell.name, isHolder ? 'bus holder' : cell.kind]
        }),
      )
      const { circuit, report } = read(`mapped/${file}`, { libraries: [library] })
      const countOf = (kind: string | null): number =>
        report.cellsUsed.reduce((sum, { cell, count }) => {
          return kind === null || kindOf.get(cell) === kind ? sum + count : sum
        }, 0)
      expect({
        file,
        columns: [
          circuit.inputs.length,
          circuit.outputs.length,
          countOf(null),
          countOf('physical'),
          report.flipFlops,
          countOf('latch'),
          report.cellsUsed.length,
        ],
      }).toEqual({ file, columns })
      expect(report.cellsUnknown).toEqual([])
    }
  })

  // SOURCE: the README's oddities.
  test('what is odd in the gf180 netlists gives X and is named', () => {
    const libraries = [readLibrary(LIBRARIES.gf180)]
    const simon = readVerilog([readData('mapped/gf180_urish_simon.v')], { libraries })
    const loop = simon.diagnostics.find((each) => each.code === 'combinational-loop')
    expect(loop?.severity).toBe('warning')
    expect(loop?.message.match(/inv_in\[\d\]/g)).toHaveLength(10)
    expect(loop?.message).toContain('clk_ring_osc')
    const kinds = Object.fromEntries(
      read('mapped/gf180_htfab_cells.v', { libraries }).report.unusable.map((row) => [row.kind, row.count]),
    )
    expect(kinds).toEqual({ 'clock gate': 6, latch: 12, 'three-state net': 5, 'unscanned flip-flop': 36 })
  })

  test('scan chains are traced from scan-in to scan-out', () => {
    const libraries = [readLibrary('scan_gates.lib')]
    const chains = (file: string) =>
      read(`mapped/${file}`, { libraries }).chains.map((chain) => [
        chain.scanIn,
        chain.cells.length,
        chain.scanOut,
      ])
    expect(chains('s15850_scan1.v')).toEqual([['SI', 534, 'SO']])
    expect(chains('s13207_scan10.v')).toEqual(
      Array.from({ length: 10 }, (_, at) => [`SI${at + 1}`, at === 9 ? 62 : 64, `SO${at + 1}`]),
    )
    const s27 = read('mapped/s27_scan.v', { libraries })
    expect(s27.chains).toEqual([
      {
        name: 'SI',
        scanIn: 'SI',
        scanOut: 'SO',
        cells: ['sc0', 'sc1', 'sc2'].map((instance, flipFlop) => {
          return { flipFlop, instance, loadInverted: false, unloadInverted: false }
        }),
      },
    ])
    expect(s27.report.testPins).toEqual([
      { name: 'SE', role: 'scan-enable', value: 0, from: 'library' },
      { name: 'SI', role: 'scan-in', value: 'X', from: 'library' },
      { name: 'CK', role: 'clock', value: 0, from: 'library' },
    ])
  })

  // SOURCE: the ScanCells lists of the STIL files that were made for these netlists.
  test.each([
    ['s27_scan.v', 's27_scan.stil'],
    ['s15850_scan1.v', 's15850_scan1_171.stil'],
    ['s13207_scan10.v', 's13207_scan10.stil'],
  ])('the chains of %s stand in the order that %s lists', (netlist, stil) => {
    const libraries = [readLibrary('scan_gates.lib')]
    const { text } = readData(`stil/${stil}`)
    const listed = [...text.matchAll(/ScanChain[^}]*ScanCells ([^;]*);/g)].map(
      ([, cells]) =>
      cells.trim().split(/\s+/).map((cell) => cell.replaceAll('"', '').replace(/^(s13207|CUT)\./, '').replace(/\.SI$/, '')), // prettier-ignore
    )
    const { chains } = read(`mapped/${netlist}`, { libraries })
    expect(chains.map((chain) => chain.cells.map((cell) => cell.instance))).toEqual(listed)
  })
})
