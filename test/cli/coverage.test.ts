import { execFileSync } from 'node:child_process'
import { lstatSync, readdirSync, readFileSync, symlinkSync } from 'node:fs'
import { readFile } from 'node:fs/promises'
import { dirname, join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { C17, NAND } from './circuits.ts'
import { runCli, runJson, temporaryFiles } from './run-cli.ts'

const file = temporaryFiles()
const nand = file('nand.bench', NAND)

describe('coverage', () => {
  // A 2-input NAND has 6 faults: {01, 11, 10} detects all, {11, 01} detects 5, {11, 00} detects 4 (common practice, no source).
  it.each([
    ['01\n11\n10\n', 6],
    ['11\n01\n', 5],
    ['11\n00\n', 4],
  ])('of a NAND by %j is %i of 6', async (patterns, detected) => {
    const json = await runJson(['coverage', nand, '-'], { stdin: patterns })
    expect(json['detected']).toMatchObject({ total: detected, possibly: 0 })
    expect(json['coverage']).toBeCloseTo(detected / 6, 12)
    expect((json['curve'] as number[]).at(-1)).toBe(detected)
  })

  // By hand: 11 detects a/0, b/0, y/1; 01 adds a/1 and, as y is 1, y/0; 10 adds b/1.
  it('gives the curve in file order, over several files', async () => {
    const paths = [file('one.vec', '11\n'), file('two.vec', '01\n10\n')]
    const json = await runJson(['coverage', nand, ...paths])
    expect(json['curve']).toEqual([3, 5, 6])
    expect(json['patterns']).toMatchObject({ count: 3 })
  })

  it('tells how long reading and simulating took, and the rate in faults × patterns', async () => {
    const json = await runJson(['coverage', nand, '-'], { stdin: '11\n01\n' })
    const { read, simulate } = json['seconds'] as { read: number; simulate: number }
    expect(read).toBeGreaterThan(0)
    expect(json['pairsPerSecond']).toBeCloseTo((6 * 2) / simulate, 6)
  })

  // By hand, as above; the second pattern detects y/0 and a/1, the third y/0 and b/1.
  it('writes every fault with its state, first pattern and detections', async () => {
    const path = join(dirname(nand), 'faults.csv')
    await runJson(['coverage', nand, '-', '--detections', 'all', '--faults', path], { stdin: '11\n01\n10\n' })
    expect(readFileSync(path, 'utf8').split('\n')).toEqual([
      'fault,state,first_pattern,detections',
      'a/0,detected,1,1',
      'a/1,detected,2,1',
      'b/0,detected,1,1',
      'b/1,detected,3,1',
      'y/0,detected,2,2',
      'y/1,detected,1,1',
      '',
    ])
  })

  it('counts detections up to the limit, one where nothing is said', async () => {
    const detectionsOfY0 = async (...options: string[]): Promise<string | undefined> => {
      const path = join(dirname(nand), 'limited.csv')
      await runJson(['coverage', nand, '-', '--faults', path, ...options], { stdin: '00\n01\n10\n' })
      return /^y\/0,detected,1,(\d+)/m.exec(readFileSync(path, 'utf8'))?.[1]
    }
    expect(await detectionsOfY0()).toBe('1')
    expect(await detectionsOfY0('--detections', '2')).toBe('2')
    expect(await detectionsOfY0('--detections', 'all')).toBe('3')
  })

  // By hand: under X0 the output is 1 whatever X is, so y/0 is detected; under X1 it is unknown.
  it('gives no credit for what only X could show', async () => {
    const json = await runJson(['coverage', nand, '-'], { stdin: 'X1\n' })
    expect(json['detected']).toMatchObject({ total: 0 })
    expect((await runJson(['coverage', nand, '-'], { stdin: 'X0\n' }))['detected']).toMatchObject({
      total: 1,
    })
  })

  it('is the same on one thread and on two', async () => {
    const patterns = Array.from({ length: 40 }, (_, at) => (at % 32).toString(2).padStart(5, '0')).join('\n')
    const path = file('c17.bench', C17)
    const curveOn = async (threads: string): Promise<unknown> =>
      (await runJson(['coverage', path, '-', '--threads', threads], { stdin: patterns }))['curve']
    expect(await curveOn('1')).toEqual(await curveOn('2'))
  })

  it('warns of expected values that the fault-free circuit does not give', async () => {
    const { code, stdout, stderr } = await runCli(['coverage', nand, '-', '--json'], {
      stdin: '11 L\n01 L\n',
    })
    expect(code).toBe(0)
    expect(JSON.parse(stdout)).toMatchObject({
      expected: {
        compared: 2,
        mismatches: 1,
        first: [{ pattern: 2, output: 'y', expected: 'L', simulated: 'H' }],
      },
    })
    expect(stderr).toContain('pattern 2, y: expected 0, simulated 1')
  })

  it('leaves no half-written file, and none at all where the work fails', async () => {
    const folder = dirname(file('out/keep', ''))
    const path = join(folder, 'faults.csv')
    const { code } = await runCli(['coverage', nand, '-', '--faults', path], { stdin: '1\n' })
    expect(code).toBe(2)
    expect(readdirSync(folder)).toEqual(['keep'])
  })

  it('writes into a pipe as it stands, and through a link into its file', async () => {
    const folder = dirname(file('links/curve.csv', 'old'))
    const link = join(folder, 'link.csv')
    const pipe = join(folder, 'pipe')
    symlinkSync(join(folder, 'curve.csv'), link)
    execFileSync('mkfifo', [pipe])
    const expected = 'pattern,detected,coverage\n1,3,0.5\n'

    await runJson(['coverage', nand, '-', '--curve', link], { stdin: '11\n' })
    expect(lstatSync(link).isSymbolicLink()).toBe(true)
    expect(readFileSync(join(folder, 'curve.csv'), 'utf8')).toBe(expected)

    const [text] = await Promise.all([
      readFile(pipe, 'utf8'),
      runJson(['coverage', nand, '-', '--curve', pipe], { stdin: '11\n' }),
    ])
    expect(text).toBe(expected)
    expect(lstatSync(pipe).isFIFO()).toBe(true)
  })
})

describe('progress', () => {
  it('is shown on a terminal alone, on one line that is cleared', async () => {
    const options = { stdin: '11\n' }
    expect((await runCli(['coverage', nand, '-'], options)).stderr).toBe('')
    const { stderr } = await runCli(['coverage', nand, '-'], { ...options, isTTY: true })
    expect(stderr).toMatch(/Reading/)
    expect(stderr).not.toContain('\n')
    expect(stderr.endsWith('\r\u001b[K')).toBe(true)
  })
})

describe('an interrupt', () => {
  it('ends with 130, a word, and nothing on standard output', async () => {
    const { code, stdout, stderr } = await runCli(['coverage', nand, '-', '--json'], {
      stdin: '11\n',
      signal: AbortSignal.abort(),
    })
    expect({ code, stdout, stderr }).toEqual({ code: 130, stdout: '', stderr: 'Interrupted.\n' })
  })
})
