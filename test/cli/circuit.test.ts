import { gzipSync } from 'node:zlib'
import { describe, expect, it } from 'vitest'
import { C17, NAND, TWO_BLOCKS } from './circuits.ts'
import { runCli, runJson, temporaryFiles } from './run-cli.ts'

const file = temporaryFiles()

describe('circuit', () => {
  // SOURCE: Brglez & Fujiwara 1985, from memory: c17 has 17 lines and 22 collapsed faults.
  it('prints counts and faults as one JSON object', async () => {
    const json = await runJson(['circuit', file('c17.bench', C17)])
    expect(json['circuit']).toMatchObject({
      name: 'c17',
      inputs: 5,
      outputs: 2,
      flipFlops: 0,
      gates: 6,
      nets: 11,
      lines: 17,
    })
    expect(json['faults']).toEqual({ model: 'stuck-at', base: 'lines', total: 34, collapsed: 22 })
  })

  it('says the same to people', async () => {
    const { code, stdout, stderr } = await runCli(['circuit', file('c17.bench', C17)])
    expect({ code, stderr }).toEqual({ code: 0, stderr: '' })
    expect(stdout).toContain('Stuck-at faults  34 on lines, 22 collapsed')
  })

  // A 2-input NAND has 6 faults (common practice, no source).
  it('reads standard input and packed files', async () => {
    const faults = { total: 6 }
    expect((await runJson(['circuit', '-'], { stdin: NAND }))['faults']).toMatchObject(faults)
    const packed = file('nand.bench.gz', gzipSync(NAND))
    expect((await runJson(['circuit', packed]))['faults']).toMatchObject(faults)
  })

  // Nothing stands in the way of any fault of an AND and an inverter once the box in front of them is known.
  it('says what each kind of source of X costs in coverage', async () => {
    const text =
      'module m(input a, b, output y, z); BOX u (.I(b), .O(x)); and (y, a, x); not (z, a); endmodule'
    const json = await runJson(['circuit', file('box.v', text)])
    const { unknownSources, unknownSourcesCost } = json['circuit'] as Record<string, unknown>
    const { coverage, together } = unknownSourcesCost as { coverage: number; together: number }
    expect(unknownSources).toEqual([{ kind: 'black box', count: 1, examples: ['u'], coverageCost: together }])
    expect(coverage + together).toBeCloseTo(1)
    const { stdout } = await runCli(['circuit', file('box2.v', text)])
    expect(stdout).toMatch(/Source of X +1 × black box: u, costs about 50\.00 % of coverage/)
  })

  it('takes further Verilog files as parts of one netlist, and the top by name', async () => {
    const [leaf = '', top = ''] = TWO_BLOCKS.split(/(?=module top)/)
    const paths = [file('top.v', top), file('leaf.v', leaf)]
    expect((await runJson(['circuit', ...paths]))['circuit']).toMatchObject({ flipFlops: 2, gates: 2 })
    const named = await runJson(['circuit', ...paths, '--top', 'leaf'])
    expect(named['circuit']).toMatchObject({ name: 'leaf', flipFlops: 1 })
  })

  it('counts warnings and leaves standard output to the JSON', async () => {
    const text = `${TWO_BLOCKS}module other (input a, output b);\n  missing u (.a(a), .b(b));\nendmodule\n`
    const { code, stdout, stderr } = await runCli(['circuit', file('w.v', text), '--top', 'other', '--json'])
    expect(code).toBe(0)
    expect(JSON.parse(stdout)).toMatchObject({
      warnings: 1,
      circuit: { cellsUnknown: [{ cell: 'missing', count: 1 }] },
    })
    expect(stderr).toContain('warning')
  })
})
