import { describe, expect, it } from 'vitest'
import { NAND } from './circuits.ts'
import { runCli, runJson, temporaryFiles } from './run-cli.ts'

const file = temporaryFiles()
const nand = file('nand.bench', NAND)
// By hand on a NAND: 11 detects a/0, b/0, y/1; 01 adds a/1, y/0; 10 adds b/1, y/0 (common practice, no source).
const first = file('first.vec', '11\n01\n')
const second = file('second.vec', '10\n11\n00\n')

describe('compare', () => {
  it('tells what the second set gains and loses, fault by fault', async () => {
    const json = await runJson(['compare', nand, first, second])
    expect(json['faults']).toMatchObject({ total: 6 })
    expect(json['sets']).toMatchObject([
      { name: first, patterns: 2, detected: 5 },
      { name: second, patterns: 3, detected: 5 },
    ])
    expect(json['pairs']).toMatchObject([
      {
        both: 4,
        neither: 0,
        gained: { count: 1, faults: ['b/1'] },
        lost: { count: 1, faults: ['a/1'] },
        isWorse: false,
      },
    ])
  })

  it('cuts both to equal time and to equal coverage', async () => {
    const json = await runJson(['compare', nand, first, second])
    // Not scanned: one vector a pattern, at 20 MHz where no tester is given.
    expect(json['pairs']).toMatchObject([
      {
        equalTime: { first: { patterns: 2, detected: 5, cycles: 2 }, second: { patterns: 2, detected: 5 } },
        equalCoverage: { first: { patterns: 2 }, second: { patterns: 2 } },
      },
    ])
  })

  it('answers no to a set that covers less, where that was asked', async () => {
    const worse = file('worse.vec', '11\n')
    const argv = ['compare', nand, first, second, worse]
    expect((await runCli(argv)).code).toBe(0)
    const { code, stderr } = await runCli([...argv, '--fail-if-worse'])
    expect(code).toBe(1)
    expect(stderr).toBe(`error: ${worse} covers less than ${first}.\n`)
  })
})
