import { spawn } from 'node:child_process'
import { join } from 'node:path'
import { beforeAll, describe, expect, it } from 'vitest'
import { buildStale } from '../../app/launch/build.mjs'
import { NAND } from './circuits.ts'
import { temporaryFiles, type CliRun } from './run-cli.ts'

const root = join(import.meta.dirname, '../..')
const file = temporaryFiles()

beforeAll(() => buildStale(['kernel', 'node']), 120_000)

/** Starts the program as a user does; `interruptAfter` sends it an interrupt so many ms later. */
function launch(argv: readonly string[], stdin = '', interruptAfter: number | null = null): Promise<CliRun> {
  return new Promise((resolve) => {
    const child = spawn(process.execPath, [join(root, 'app/launch.mjs'), ...argv], { cwd: root })
    let stdout = ''
    let stderr = ''
    child.stdout.on('data', (piece: Buffer) => (stdout += piece.toString()))
    child.stderr.on('data', (piece: Buffer) => (stderr += piece.toString()))
    child.on('close', (code) => resolve({ code: code ?? -1, stdout, stderr }))
    child.stdin.on('error', () => undefined)
    child.stdin.end(stdin)
    if (interruptAfter !== null) setTimeout(() => child.kill('SIGINT'), interruptAfter)
  })
}

describe('the program as it is started', () => {
  it('prints one JSON object, from a file and from standard input', async () => {
    const { code, stdout, stderr } = await launch(
      ['coverage', file('nand.bench', NAND), '-', '--json'],
      '01\n11\n10\n',
    )
    expect({ code, stderr }).toEqual({ code: 0, stderr: '' })
    expect(JSON.parse(stdout)).toMatchObject({ coverage: 1, curve: [2, 5, 6] })
  })

  it('reads standard input for commands on a thread of their own, too', async () => {
    const { code, stdout } = await launch(['plan', file('nand.bench', NAND), '-', '--json'], '01\n11\n10\n')
    expect(code).toBe(0)
    expect(JSON.parse(stdout)).toMatchObject({ order: [2, 1, 3], budget: { detected: 6 } })
  })

  it('exits with 2 for bad input and 1 for an answer that is no', async () => {
    const bad = await launch(['circuit', file('bad.bench', 'y = NADN(a)\n')])
    expect({ code: bad.code, stdout: bad.stdout }).toEqual({ code: 2, stdout: '' })
    const no = await launch(['plan', file('nand.bench', NAND), '-', '--min-coverage', '1'], '11\n')
    expect(no.code).toBe(1)
    expect(no.stderr).toContain('The nearest is 50.00 %')
  })

  it('lists its commands and tells the options of each', async () => {
    const { code, stdout } = await launch(['help'])
    expect(code).toBe(0)
    for (const command of ['circuit', 'coverage', 'plan', 'compare', 'serve'])
      expect(stdout).toContain(`  ${command} `)
    expect((await launch(['plan', '--help'])).stdout).toContain('--max-dppm D')
  })

  it(
    'stops at an interrupt in the middle of a long choice, within a moment, with 130',
    { timeout: 60_000 },
    async () => {
      const demo = ['fern.bench', 'fern-b.vec'].map((name) => join(root, 'assets/demo', name))
      const startedAt = performance.now()
      const { code, stdout } = await launch(['plan', ...demo, '--order', 'smallest'], '', 1500)
      expect(performance.now() - startedAt).toBeLessThan(15_000)
      expect([code, stdout]).toEqual([130, ''])
    },
  )
})
