import { randomBytes } from 'node:crypto'
import { dirname } from 'node:path'
import { gzipSync } from 'node:zlib'
import { describe, expect, it } from 'vitest'
import { C17, NAND } from './circuits.ts'
import { runCli, temporaryFiles } from './run-cli.ts'

const file = temporaryFiles()
const c17 = file('c17.bench', C17)
const vectors = file('ok.vec', '00000\n11111\n')

/** Runs what must be refused; returns what standard error says of it. */
async function refused(...argv: string[]): Promise<string> {
  const { code, stdout, stderr } = await runCli([...argv, '--json'])
  expect({ code, stdout }).toEqual({ code: 2, stdout: '' })
  return stderr
}

describe('a netlist that can not be used', () => {
  it('may be empty', async () => {
    expect(await refused('circuit', file('empty.bench', ''))).toContain('the file is empty')
  })

  it('may be a folder, or nothing at all', async () => {
    expect(await refused('circuit', dirname(c17))).toContain('this is a folder')
    expect(await refused('circuit', `${c17}.not`)).toContain('there is no such file')
  })

  it('may be binary noise, or gzip that is cut off', async () => {
    const noise = Buffer.concat([Buffer.from([1]), randomBytes(4096)])
    expect(await refused('circuit', file('noise.bench', noise))).toContain('this is no text')
    const packed = gzipSync(C17.repeat(100))
    expect(await refused('circuit', file('cut.bench.gz', packed.subarray(0, 60)))).toContain('cut off')
  })

  it('may be of another kind', async () => {
    expect(await refused('circuit', vectors)).toContain('this looks like patterns')
  })

  it('may be truncated', async () => {
    const stderr = await refused('circuit', file('truncated.bench', C17.slice(0, 60)))
    expect(stderr).toMatch(/truncated\.bench:\d+:\d+ - error: /)
  })

  it('may have no output', async () => {
    const text = 'INPUT(a)\nb = NOT(a)\n'
    expect(await refused('circuit', file('no-output.bench', text))).toContain('has no OUTPUT')
  })

  it('is shown with the line, carets under the place, and what to do', async () => {
    const path = file('gate.bench', 'INPUT(a)\nOUTPUT(y)\ny = NADN(a, a)\n')
    expect(await refused('circuit', path))
      .toBe(`${path}:3:5 - error: "NADN" is no gate of this format; expected one of AND, NAND, OR, NOR, XOR, XNOR, NOT, INV, BUF, BUFF, DFF
2 | OUTPUT(y)
3 | y = NADN(a, a)
  |     ^^^^
  Did you mean "NAND"?
`)
  })

  it('may be 100 MB in one line', { timeout: 60_000 }, async () => {
    const startedAt = performance.now()
    const stderr = await refused('circuit', file('long.bench', 'INPUT(a)'.repeat(12_500_000)))
    expect(stderr).toContain('driven a second time')
    expect(stderr.length).toBeLessThan(100_000)
    expect(performance.now() - startedAt).toBeLessThan(30_000)
  })
})

describe('patterns that can not be used', () => {
  it('may have the wrong width', async () => {
    const stderr = await refused('coverage', c17, file('width.vec', '00000\n0000\n'))
    expect(stderr).toContain('width.vec:2:1 - error: pattern 2 has 4 input characters; "c17" takes 5')
  })

  it('may have an unknown character', async () => {
    const stderr = await refused('coverage', c17, file('char.vec', '00000\n00z00\n'))
    expect(stderr).toContain('char.vec:2:3 - error: expected 0, 1 or X for an input, found "z"')
  })

  it('may be none', async () => {
    expect(await refused('coverage', c17, file('none.vec', '# none\n'))).toContain('the file has no pattern')
    expect(await refused('coverage', c17, file('empty.vec', ''))).toContain('the file is empty')
    expect(await refused('coverage', c17)).toContain('Pattern files are needed')
  })

  it('may be a netlist', async () => {
    expect(await refused('coverage', c17, file('c17.txt', C17))).toContain('this looks like a netlist')
  })
})

describe('assumptions that can not be used', () => {
  const withProduct = (text: string): Promise<string> =>
    refused('plan', c17, vectors, '--product', file('product.json', text))

  it('may have a key misspelled', async () => {
    const stderr = await withProduct('{"yeild": 0.9}')
    expect(stderr).toContain('the product file has no "yeild"')
    expect(stderr).toContain('Did you mean "yield"?')
  })

  it.each(['0', '1.5', '-0.1', '"high"'])('may have a yield of %s', async (value) => {
    expect(await withProduct(`{"yield": ${value}}`)).toMatch(/product\.json:1:11 - error: "yield"/)
  })

  it('may contradict each other', async () => {
    const constraints = file('c.json', '{"before": [[1, 2], [2, 1]]}')
    const stderr = await refused('plan', c17, vectors, '--constraints', constraints)
    expect(stderr).toContain('these constraints go in a circle')
  })

  it('may name a pattern that is not there', async () => {
    const constraints = file('keep.json', '{"keep": [3]}')
    expect(await refused('plan', c17, vectors, '--constraints', constraints)).toContain(
      'the set has no pattern 3',
    )
  })

  it('are refused before anything is simulated', async () => {
    const stderr = await refused(
      'plan',
      c17,
      file('bad.vec', '0\n'),
      '--tester',
      file('t.json', '{"site": 2}'),
    )
    expect(stderr).toContain('Did you mean "sites"?')
    expect(stderr).not.toContain('bad.vec')
  })
})

describe('a command line that can not be followed', () => {
  it.each([
    [['covrage'], 'Did you mean "coverage"?'],
    [['frobnicate'], 'Commands: circuit, coverage, plan, compare'],
    [['coverage', c17, vectors, '--detection', 'all'], 'Did you mean --detections?'],
    [['coverage', c17, vectors, '--detections', '0'], '--detections takes a whole number from 1, or all'],
    [['coverage', c17, vectors, '--detections'], '--detections needs a value'],
    [
      ['coverage', c17, vectors, '--threads', 'two'],
      '--threads takes a whole number from 1 to 256; "two" was given',
    ],
    [['coverage', c17, vectors, '--threads', '1', '--threads', '2'], '--threads was given twice'],
    [['coverage', c17, vectors, '--faults', vectors], 'this file is read by the same command'],
    [['coverage', c17, vectors, '--faults', '/no/such/place.csv'], 'there is no folder /no/such'],
    [['circuit'], 'A netlist is needed'],
    [['circuit', c17, '--test-pin', 'SE'], '--test-pin takes NAME=0, NAME=1 or NAME=X'],
    [
      ['plan', c17, vectors, '--min-coverage', '97'],
      '--min-coverage takes a coverage from 0 to 1; "97" was given',
    ],
    [['plan', c17, vectors, '--order', 'best'], '--order takes as-delivered, steepest or smallest'],
    [['plan', c17, vectors, '--report', 'plan.doc'], 'must end in one of .html, .pdf, .xlsx, .csv'],
    [['plan', c17, vectors, '--order', 'smallest', '--n', '2'], 'is for one detection'],
    [['compare', c17, vectors], 'Two pattern files or more are needed'],
    [['compare', 'no-such.tallycut', '1', '2'], 'There is no file at no-such.tallycut'],
  ])('%j', async (argv, message) => {
    const { code, stdout, stderr } = await runCli(argv)
    expect({ code, stdout }).toEqual({ code: 2, stdout: '' })
    expect(stderr).toContain(message)
  })

  it('is a NAND away from one that can be', async () => {
    const { code } = await runCli(['coverage', file('nand.bench', NAND), '-'], { stdin: '11\n' })
    expect(code).toBe(0)
  })
})
