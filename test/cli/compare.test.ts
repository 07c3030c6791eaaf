import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { adderProject, testApplication } from '../helpers/test-application.ts'
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

describe('compare of runs in a project', () => {
  /** A project with a run of all eight patterns of a serial adder and one of four of them. */
  async function projectWithTwoRuns(): Promise<string> {
    const application = testApplication()
    const { call, addText, ended } = application
    const { productId, netlistId, patternSetId } = await adderProject(application)
    const fileIds = [await addText('four.vec', '000\n011\n101\n110\n')]
    const { inspectionId } = await call('patternSets.inspect', { netlistId, fileIds })
    const four = await call('patternSets.save', { productId, inspectionId, name: 'Four' })
    for (const id of [patternSetId, four.id]) {
      await ended(productId, (await call('runs.start', { netlistId, patternSetId: id })).id)
    }
    await application.application.close()
    return join(application.folder, 'projects', 'Adders.tallycut')
  }

  it('reads what the runs detected and leaves the file as it was', async () => {
    const path = await projectWithTwoRuns()
    const before = readFileSync(path)
    const json = await runJson(['compare', path, '1', 'Adder/2'])
    // SOURCE: a full adder has no redundant line (common practice, no source), so exhaustive patterns detect all 32.
    expect(json['sets']).toMatchObject([
      { name: 'run 1: All on r1', patterns: 8, detected: 32, coverage: 1 },
      { name: 'run 2: Four on r1', patterns: 4 },
    ])
    const [pair] = json['pairs'] as {
      both: number
      gained: { count: number }
      lost: { count: number }
      isWorse: boolean
    }[]
    expect(pair?.gained.count).toBe(0)
    expect((pair?.both ?? 0) + (pair?.lost.count ?? 0)).toBe(32)
    expect(pair?.isWorse).toBe((pair?.lost.count ?? 0) > 0)
    expect(readFileSync(path).equals(before)).toBe(true)
  })

  it('refuses runs that are not there, naming those that are', async () => {
    const path = await projectWithTwoRuns()
    const { code, stdout, stderr } = await runCli(['compare', path, '1', '7'])
    expect({ code, stdout }).toEqual({ code: 2, stdout: '' })
    expect(stderr).toContain('There is no run "7". Runs of the project: Adder/2, Adder/1.')
  })
})
