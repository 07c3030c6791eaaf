import { describe, expect, it } from 'vitest'
import { readBench } from '../../../../app/engine/formats/bench/read-bench.ts'
import { proposeTestPins, readStil, surveyStil } from '../../../../app/engine/formats/stil/read-stil.ts'
import { DEFAULT_PRODUCT } from '../../../../app/engine/quality/product.ts'
import { compareResponse } from '../../../../app/engine/simulate/compare-response.ts'
import { DEFAULT_TESTER } from '../../../../app/engine/tester/tester.ts'
import { buildTimeModel, timeColumns } from '../../../../app/engine/tester/time-model.ts'
import { hasData, readData } from '../../../helpers/data.ts'
import { readScanNetlist } from './scan-netlists.ts'

describe.skipIf(!hasData)('the open STIL files', () => {
  // Counts: the data folder's README, from an independent replay. Scan-outs as outputs and the loads that a chain test
  // shifts through are counted there with the outputs left out and the unloads put in.
  it.each([
    ['s27_scan', 's27_scan', { patterns: 12, outputs: 12, unloads: 36, loads: 0 }],
    [
      's15850_scan1',
      's15850_scan1_171',
      { patterns: 172, outputs: 25_800, unloads: 91_314 - 534, loads: 534 },
    ],
    [
      's13207_scan10',
      's13207_scan10',
      { patterns: 196, outputs: 29_792, unloads: 125_048 - 53_592, loads: 53_592 },
    ],
  ])('replays %s without a mismatch', (name, patterns, counts) => {
    const source = readData(`stil/${patterns}.stil`)
    const netlist = readScanNetlist(name, source)
    const { value, diagnostics } = readStil(source, netlist)
    expect(diagnostics).toEqual([])
    const comparison = compareResponse(netlist, value!.patterns)
    expect({
      patterns: value!.patterns.nPatterns,
      outputs: comparison.outputs.compared,
      unloads: comparison.unloads.compared,
      loads: comparison.loads.compared,
    }).toEqual(counts)
    expect(comparison.total).toMatchObject({ mismatches: 0, unknown: 0 })
    expect(value!.report.signals).toMatchObject({
      unmatched: [],
      inputsWithoutSignal: [],
      outputsWithoutSignal: [],
    })
    expect(value!.report.chains.every(({ agrees }) => agrees)).toBe(true)
  })

  // Counts: the comment that each file itself ends with, written by the program that made it.
  it.each(['s15850_scan1_171', 's13207_scan10', 's15850_noscan_60'])(
    'counts the cycles of %s as its own last line does',
    (name) => {
      const source = readData(`stil/${name}.stil`)
      const [, vectors, cycles] =
        /reference (\d+) V statements, generating (\d+) test cycles/.exec(source.text) ?? []
      const { report } = surveyStil(source).value!
      expect([report.vectorStatements, report.cycles.total]).toEqual([Number(vectors), Number(cycles)])
    },
  )

  it.each(['s27_scan', 's15850_scan1', 's13207_scan10'])(
    'plans the whole of %s, unloads included, at the cycles that its file takes',
    (name) => {
      const source = readData(`stil/${name === 's15850_scan1' ? 's15850_scan1_171' : name}.stil`)
      const netlist = readScanNetlist(name, source)
      const { patterns, report } = readStil(source, netlist).value!
      const scan = { flipFlops: netlist.circuit.flipFlops.length, tracedChains: null, tracedLongest: null }
      const time = buildTimeModel(DEFAULT_TESTER, DEFAULT_PRODUCT, patterns, scan)
      const everyPattern = Uint32Array.from({ length: patterns.nPatterns }, (_, pattern) => pattern)
      const { cycles } = timeColumns(time, everyPattern, false, 0)
      expect(cycles.at(-1)).toBe(report.cycles.total + time.onceCycles)
    },
  )

  it('plays the patterns without scan on the flat circuit, its state unknown', () => {
    const netlist = readBench(readData('circuits/iscas89/s15850.1.bench')).value!
    const { value } = readStil(readData('stil/s15850_noscan_60.stil'), netlist)
    expect(value!.patterns.nPatterns).toBe(60)
    expect(value!.report.signals.unmatched).toEqual(['GND', 'VDD', 'CK'])
    expect(value!.report.stateNotLoaded).toBe(60)
    const { total } = compareResponse(netlist, value!.patterns)
    expect(total).toMatchObject({ mismatches: 0, unknown: 0 })
    // Counted in the file by a text search: H and L in the data of "all_out" that patterns pass.
    const { text } = readData('stil/s15850_noscan_60.stil')
    const expects = [...text.matchAll(/"all_out"=([HLX]{150});/g)].map(
      ([, data]) => data.replaceAll('X', '').length,
    )
    expect(total.compared).toBe(expects.reduce((sum, count) => sum + count, 0))
  })

  it('refuses the bus transceiver with damaged quoting, at the damage', () => {
    const source = readData('stil/bus_transceiver_malformed.stil')
    const { value, diagnostics } = surveyStil(source)
    expect(value).toBeNull()
    expect(diagnostics[0]).toMatchObject({ code: 'syntax', severity: 'error' })
    expect(source.text.slice(diagnostics[0].span.start, diagnostics[0].span.end)).toMatch(/^"A0 \+ A1/)
    expect(diagnostics[0].hint).toContain('apostrophes')
  })

  it('reads the same file with its quoting put right', () => {
    const { value, diagnostics } = surveyStil(readData('stil/bus_transceiver_fixed.stil'))
    expect(diagnostics).toEqual([])
    // One vector; a macro and a procedure that shift 34 bits, the procedure with one vector before; one vector between.
    expect(value!.report.cycles.total).toBe(1 + 34 + 1 + 1 + 30)
  })

  it('proposes the test pins that the netlists were built with', () => {
    const pins = proposeTestPins(readData('stil/s13207_scan10.stil'), [
      'CK',
      'SE',
      'SI1',
      'GND',
      'VDD',
      'g1',
      'g10',
    ])
    expect(pins.map(({ name, role, value }) => `${name} ${role} ${value}`)).toEqual([
      'GND fixed 0',
      'VDD fixed 1',
      'CK clock 0',
      'SI1 scan-in 0',
      'SE scan-enable 0',
    ])
  })
})
