import { execFileSync } from 'node:child_process'
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { readStil } from '../../../../app/engine/formats/stil/read-stil.ts'
import { stilParts, writeStil } from '../../../../app/engine/formats/stil/write-stil.ts'
import { exportWarnings } from '../../../../app/engine/formats/export-selection.ts'
import { compareResponse } from '../../../../app/engine/simulate/compare-response.ts'
import { simulateGood } from '../../../../app/engine/simulate/good-machine.ts'
import { simulateTwin } from '../../../../app/engine/simulate/twin.ts'
import { buildFaultList } from '../../../../app/engine/faults/build-fault-list.ts'
import {
  bitAt,
  emptyPlane,
  setBit,
  type BitPlane,
  type PatternSet,
} from '../../../../app/engine/simulate/pattern-set.ts'
import { hasData, readData } from '../../../helpers/data.ts'
import { readScanNetlist } from './scan-netlists.ts'
import { smallScanDesign, smallStil } from './small-scan-design.ts'

/** A plane's bits pattern by pattern in the order of a sequence; null planes read as the bit given. */
function bits(plane: BitPlane | null, sequence: readonly number[], rows: number, none: string): string[] {
  return sequence.map((pattern) =>
    Array.from({ length: rows }, (_, row) =>
      plane === null ? none : bitAt(plane, row, pattern) ? '1' : '0',
    ).join(''),
  )
}

/** All that coverage depends on, in the order of a sequence. */
function contents(patterns: PatternSet, sequence: readonly number[]) {
  const { value, unknown, observed, expected } = patterns
  const responses = expected!.care.rows
  return {
    value: bits(value, sequence, value.rows, '0'),
    unknown: bits(unknown, sequence, value.rows, '0'),
    observed: bits(observed, sequence, responses, '1'),
    care: bits(expected!.care, sequence, responses, '0'),
    expected: bits(expected!.value, sequence, responses, '0'),
    withoutCapture: sequence.map((pattern) => patterns.withoutCapture?.[pattern] ?? 0),
  }
}

function inOrder(count: number): number[] {
  return Array.from({ length: count }, (_, pattern) => pattern)
}

describe('writeStil', () => {
  const design = smallScanDesign()
  const text = smallStil(`Call load { SI=100; } Call capture { pi=10; po=LH; } Call load { SI=01N; SO=LHX; }
    Call look { pi=N1; po=XL; } Call load { SI=011; SO=LHX; } Call capture { pi=01; po=LL; } Call load { SO=HLX; }`)
  const patterns = readStil({ name: 'small', text }, design).value!.patterns

  it('is read back as the same patterns in the chosen order', () => {
    const sequence = [2, 0, 1]
    const { value, diagnostics } = readStil(
      { name: 'export', text: writeStil(patterns, design, sequence) },
      design,
    )
    expect(diagnostics).toEqual([])
    expect(contents(value!.patterns, inOrder(3))).toEqual(contents(patterns, sequence))
  })

  it('masks the first unload and adds the last', () => {
    const written = writeStil(patterns, design, [0])
    expect(written.match(/"S[IO]"=[01NLHX]+;/g)).toEqual(['"SI"=100;', '"SO"=LHX;'])
  })

  it('writes inversions so that they are read back', () => {
    const cells = [
      { flipFlop: 2, instance: 'F3', loadInverted: true, unloadInverted: true },
      { flipFlop: 0, instance: 'F1', loadInverted: true, unloadInverted: true },
      { flipFlop: 1, instance: 'F2', loadInverted: false, unloadInverted: false },
    ]
    const inverting = smallScanDesign({ cells })
    const exported = { name: 'export', text: writeStil(patterns, inverting, [0, 1, 2]) }
    for (const netlist of [inverting, smallScanDesign({ hasChain: false })]) {
      const { value, diagnostics } = readStil(exported, netlist)
      expect(diagnostics).toEqual([])
      expect(contents(value!.patterns, inOrder(3))).toEqual(contents(patterns, inOrder(3)))
    }
  })

  it('assumes one chain where the netlist shows none, and expects the response that it is given', () => {
    const flat = smallScanDesign({ hasChain: false })
    const value = emptyPlane(5, 2)
    for (const [row, pattern] of [
      [0, 0],
      [3, 0],
      [1, 1],
      [2, 1],
    ] as const)
      setBit(value, row, pattern)
    const plain: PatternSet = {
      nPatterns: 2,
      value,
      unknown: null,
      expected: null,
      observed: null,
      cycles: null,
      timeOnly: null,
      bursts: [{ name: '', first: 0, count: 2 }],
    }
    const response = simulateGood(flat.circuit, plain)
    const { value: back } = readStil({ name: 'x', text: writeStil(plain, flat, [0, 1], { response }) }, flat)
    expect(contents(back!.patterns, [0, 1])).toMatchObject({
      value: ['10010', '01100'],
      unknown: ['00000', '00000'],
    })
    expect(compareResponse(flat, back!.patterns).total).toEqual({ compared: 10, mismatches: 0, unknown: 0 })
    expect(exportWarnings({ patterns: plain, circuit: flat.circuit, sequence: [0] })).toHaveLength(1)
  })

  it('drives and compares a pin that is input and output at once', () => {
    const bench = smallScanDesign({ hasChain: false })
    const circuit = {
      ...bench.circuit,
      outputs: Uint32Array.of(bench.circuit.inputs[0], ...bench.circuit.outputs),
    }
    const netlist = { ...bench, circuit }
    const pattern = smallStil('V { CK=0; SE=0; SI=0; pi=10; po=LX; } V { pi=01; po=LX; }', { structures: '' })
    const value = readStil({ name: 'x', text: pattern }, bench).value!.patterns
    const response = simulateGood(circuit, value)
    const set = { ...value, expected: null, observed: null }
    const back = readStil({ name: 'y', text: writeStil(set, netlist, [0, 1], { response }) }, netlist).value!
    expect(compareResponse(netlist, back.patterns).byOutput).toMatchObject([
      { name: 'A', compared: 2, mismatches: 0 },
      { name: 'Y', compared: 2, mismatches: 0 },
    ])
  })

  it('leaves out what counts for time alone, and says so', () => {
    const timeOnly = { ...patterns, timeOnly: Uint8Array.of(0, 1, 0) }
    const selection = { patterns: timeOnly, circuit: design.circuit, sequence: [0, 1, 2] }
    expect(Array.from(stilParts(timeOnly, design, [0, 1, 2]))).toHaveLength(4)
    expect(exportWarnings(selection)).toEqual([expect.stringContaining('1 pattern counts for time alone')])
  })

  it('warns where a pattern leaves the one whose state it needs', () => {
    const dependent = { ...patterns, dependsOnPrevious: Uint8Array.of(0, 1, 1) }
    const warningsFor = (sequence: number[]) =>
      exportWarnings({ patterns: dependent, circuit: design.circuit, sequence })
    expect(warningsFor([0, 1, 2])).toEqual([])
    expect(warningsFor([1, 2, 0])).toEqual([expect.stringContaining('1 pattern depends')])
    expect(warningsFor([2, 0])).toHaveLength(1)
  })
})

/** Verilog models of the seven cells, from the functions that scan_gates.lib gives. */
const CELL_MODELS = `
module INVX1(input A, output Y); assign Y = ~A; endmodule
module BUFX1(input A, output Y); assign Y = A; endmodule
module AND2X1(input A, input B, output Y); assign Y = A & B; endmodule
module NAND2X1(input A, input B, output Y); assign Y = ~(A & B); endmodule
module OR2X1(input A, input B, output Y); assign Y = A | B; endmodule
module NOR2X1(input A, input B, output Y); assign Y = ~(A | B); endmodule
module S_DFFX1(input CK, D, SE, SI, output reg Q); always @(posedge CK) Q <= SE ? SI : D; endmodule
`

/** A test bench that applies an exported file cycle by cycle, as its text says, and counts what it compares. */
function testBench(stil: string, top: string): string {
  const groups = new Map(
    [...stil.matchAll(/^ {2}"(\w+)" = '([^']*)';$/gm)].map(([, name, members]) => [
      name,
      members.split(' + ').map((member) => member.slice(1, -1)),
    ]),
  )
  const inputs = groups.get('driven') ?? []
  const outputs = groups.get('compared') ?? []
  const steps: string[] = []
  const drive = (pins: readonly string[], data: string): void => {
    pins.forEach((pin, at) => steps.push(`${pin} = ${data[at] === 'N' ? "1'bx" : `1'b${data[at]}`};`))
  }
  const check = (pins: readonly string[], data: string): void => {
    pins.forEach((pin, at) => {
      if (data[at] !== 'X') steps.push(`check(${pin}, 1'b${data[at] === 'H' ? 1 : 0});`)
    })
  }
  const pulse = '#1 CK = 1; #1 CK = 0; #1;'
  const [, shiftState] = /"load_unload" \{\s+W "main";\s+C \{ "CK"=0; "driven"=(\d+);/.exec(stil) ?? []
  const [, captureState] = /"capture" \{ W "main"; C \{ "CK"=0; "driven"=(\d+);/.exec(stil) ?? []
  for (const [, procedure, body] of stil.matchAll(/Call "(\w+)" \{([^}]*)\}/g)) {
    const data = new Map([...body.matchAll(/"(\w+)"=(\w+);/g)].map(([, name, text]) => [name, text]))
    if (procedure === 'load_unload') {
      drive(inputs, shiftState)
      const length = Math.max(...[...data.values()].map((text) => text.length))
      for (let cycle = 0; cycle < length; cycle++) {
        for (const [pin, text] of data) {
          const isInput = inputs.includes(pin)
          const at = isInput ? cycle - (length - text.length) : cycle
          const sign = text[at]
          if (sign === undefined) continue
          if (isInput) drive([pin], sign)
          else check([pin], sign)
        }
        steps.push(pulse)
      }
    } else {
      drive(inputs, captureState)
      drive(groups.get('inputs') ?? [], data.get('inputs') ?? '')
      steps.push('#1;')
      check(groups.get('outputs') ?? [], data.get('outputs') ?? '')
      if (procedure === 'capture') steps.push(pulse)
    }
  }
  const tasks: string[] = []
  for (let at = 0; at < steps.length; at += 2000) {
    tasks.push(`task part${at}; begin\n${steps.slice(at, at + 2000).join('\n')}\nend endtask`)
  }
  return `module bench;
reg CK = 0; ${inputs.map((pin) => `reg ${pin} = 0;`).join(' ')} ${outputs.map((pin) => `wire ${pin};`).join(' ')}
integer compared = 0, wrong = 0;
${top} dut (.CK(CK), ${[...inputs, ...outputs].map((pin) => `.${pin}(${pin})`).join(', ')});
task check(input found, input wanted); begin compared = compared + 1; if (found !== wanted) wrong = wrong + 1; end endtask
${tasks.join('\n')}
initial begin ${tasks.map((_, at) => `part${at * 2000};`).join(' ')} $display("%0d %0d", compared, wrong); end
endmodule
`
}

describe.skipIf(!hasData)('an exported STIL file', () => {
  it('detects what the set detects, and the patterns chosen from it detect what they did there', () => {
    const source = readData('stil/s27_scan.stil')
    const netlist = readScanNetlist('s27_scan', source)
    const { patterns } = readStil(source, netlist).value!
    const { circuit } = netlist
    const faults = buildFaultList(circuit)
    const detectionsOf = (set: PatternSet): number[] =>
      Array.from(
        simulateTwin({ circuit, faults, patterns: set, detectionLimit: 0, classes: null, wantMatrix: false })!
          .profile.detections,
      )
    const reversed = writeStil(patterns, netlist, inOrder(12).reverse())
    const all = detectionsOf(patterns)
    expect(all.some((count) => count > 0)).toBe(true)
    expect(detectionsOf(readStil({ name: 'export', text: reversed }, netlist).value!.patterns)).toEqual(all)
    const halves = [inOrder(6), inOrder(12).slice(6)].map((sequence) =>
      detectionsOf(
        readStil({ name: 'half', text: writeStil(patterns, netlist, sequence) }, netlist).value!.patterns,
      ),
    )
    expect(halves[0].map((count, at) => count + halves[1][at])).toEqual(all)
  })

  it.each([
    ['s27_scan', 's27_scan', 's27_scan', 12],
    ['s15850_scan1', 's15850_scan1_171', 'CUT', 3],
    ['s13207_scan10', 's13207_scan10', 's13207', 12],
  ])(
    'of %s plays in Icarus Verilog without a mismatch, backwards',
    { timeout: 120_000 },
    (name, patternFile, top, count) => {
      const source = readData(`stil/${patternFile}.stil`)
      const netlist = readScanNetlist(name, source)
      const { patterns } = readStil(source, netlist).value!
      const sequence = inOrder(count).reverse()
      const stil = writeStil(patterns, netlist, sequence)
      const back = readStil({ name: 'export', text: stil }, netlist).value!
      expect(contents(back.patterns, inOrder(count))).toEqual(contents(patterns, sequence))
      const { total } = compareResponse(netlist, back.patterns)

      const folder = mkdtempSync(join(tmpdir(), 'tallycut-'))
      try {
        writeFileSync(
          join(folder, 'bench.v'),
          CELL_MODELS + readData(`mapped/${name}.v`).text + testBench(stil, top),
        )
        execFileSync('iverilog', [
          '-g2005',
          '-s',
          'bench',
          '-o',
          join(folder, 'bench'),
          join(folder, 'bench.v'),
        ])
        const printed = execFileSync('vvp', ['-n', join(folder, 'bench')], { encoding: 'utf8' })
        expect(printed.trim()).toBe(`${total.compared} 0`)
      } finally {
        rmSync(folder, { recursive: true })
      }
    },
  )
})
