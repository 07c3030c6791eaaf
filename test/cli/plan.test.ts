import { readdirSync, readFileSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { C17, NAND } from './circuits.ts'
import { runCli, runJson, temporaryFiles } from './run-cli.ts'

const file = temporaryFiles()
const nand = file('nand.bench', NAND)
const c17 = file('c17.bench', C17)
const all32 = file(
  'all.vec',
  Array.from({ length: 32 }, (_, at) => at.toString(2).padStart(5, '0')).join('\n'),
)

type Budget = {
  patterns: number
  chosen: number[]
  detected: number
  coverage: number
  cycles: number
  milliseconds: number
  perDeviceMilliseconds: number
}
type PlanJson = {
  order: number[]
  curve: number[]
  ceiling: number[]
  budget: Budget
  gap: number
  smallest?: { patterns: number; lowerBound: number; proven: boolean }
  isReached: boolean
}

async function planJson(...argv: string[]): Promise<PlanJson> {
  return (await runJson(['plan', ...argv])) as unknown as PlanJson
}

describe('plan', () => {
  // By hand on a NAND: 00 detects y/0; 11 a/0, b/0, y/1; 01 a/1, y/0; 10 b/1, y/0 (common practice, no source).
  const patterns = file('nand.vec', '00\n01\n10\n11\n')

  it('orders by gain, with what gains nothing last, and gives the curve in that order', async () => {
    const plan = await planJson(nand, patterns)
    expect(plan.order).toEqual([4, 2, 3, 1])
    expect(plan.curve).toEqual([3, 5, 6, 6])
    expect(plan.ceiling).toEqual([3, 5, 6, 6])
    expect(plan.budget).toMatchObject({ patterns: 3, chosen: [4, 2, 3], detected: 6, coverage: 1 })
    expect(plan.gap).toBe(0)
  })

  it('says what it says of coverage, too', async () => {
    expect(await runJson(['plan', nand, patterns])).toMatchObject({
      circuit: { name: 'nand' },
      faults: { total: 6 },
      patterns: { count: 4 },
      detected: { total: 6 },
      coverage: 1,
    })
  })

  it('takes limits as inclusive, and goals by the shortest prefix', async () => {
    expect((await planJson(nand, patterns, '--max-patterns', '2')).budget).toMatchObject({
      patterns: 2,
      detected: 5,
    })
    const delivered = await planJson(nand, patterns, '--order', 'as-delivered', '--max-cycles', '3')
    expect(delivered.budget).toMatchObject({ chosen: [1, 2, 3], cycles: 3, detected: 3 })
    const goal = await planJson(nand, patterns, '--min-coverage', String(5 / 6))
    expect(goal.budget).toMatchObject({ chosen: [4, 2], detected: 5 })
  })

  it('answers no to a goal that these patterns can not meet, with the nearest that can be met', async () => {
    const { code, stdout, stderr } = await runCli(['plan', nand, '-', '--min-coverage', '0.9', '--json'], {
      stdin: '11\n00\n',
    })
    expect(code).toBe(1)
    expect(stderr).toContain("can't be reached: these patterns detect no more. The nearest is 66.67 %")
    expect(JSON.parse(stdout)).toMatchObject({ isReached: false, budget: { detected: 4 } })
  })

  it('names the limit that stands in the way of a goal', async () => {
    const argv = ['plan', nand, patterns, '--min-coverage', '1', '--max-patterns', '2']
    const { code, stderr } = await runCli(argv)
    expect(code).toBe(1)
    expect(stderr).toContain('the limit of 2 patterns stands in the way. The nearest is 83.33 %')
  })

  // c17 has 34 faults (Brglez & Fujiwara 1985, from memory), all detected by its 32 patterns: half of them drawn stand for all.
  it('plans from a sample where asked to, and says between what the whole list lies', async () => {
    const json = await runJson(['plan', c17, all32, '--sample', '17', '--seed', '5'])
    const { sample, detected, total, lost, budget } = json as unknown as {
      budget: Budget
      sample: { size: number; population: number; seed: number; atCut: Record<string, number> }
      detected: { total: number }
      total: number
      lost: null
    }
    expect(sample).toMatchObject({ size: 17, population: 34, seed: 5 })
    expect({ detected: detected.total, total, lost }).toEqual({ detected: 34, total: 34, lost: null })
    expect(sample.atCut['coverageLow']).toBeGreaterThan(0.5)
    expect(sample.atCut['coverageHigh']).toBeGreaterThanOrEqual(budget.coverage)
    expect(sample.atCut['coverageHigh']).toBeLessThanOrEqual(1)
    const { stdout, stderr } = await runCli(['plan', c17, all32, '--accuracy', '0.2'])
    expect(stdout).toMatch(/Sample +\d+ of 34 detectable faults: with all of them it lies between/)
    expect(stderr).toContain('figures are estimates')
  })

  it('refuses a sample that is asked for twice, and a list of all faults from one', async () => {
    const both = await runCli(['plan', c17, all32, '--sample', '9', '--accuracy', '0.1'])
    expect(both).toMatchObject({ code: 2, stdout: '' })
    const listed = await runCli(['plan', c17, all32, '--sample', '9', '--faults', file('out.csv', '')])
    expect(listed).toMatchObject({ code: 2, stdout: '' })
    expect(listed.stderr).toContain('knows that of the faults drawn alone')
  })

  // A NAND needs 01, 10 and 11 (common practice, no source); 11 stands there twice, at 9 and at 2 cycles.
  it('finds the complete set of least cycles', async () => {
    const argv = ['-', '--order', 'smallest', '--smallest-by', 'cycles', '--json']
    const { stdout } = await runCli(['plan', nand, ...argv], { stdin: '01 @5\n11 @9\n10 @3\n11 @2\n' })
    const { smallest, budget } = JSON.parse(stdout) as PlanJson
    expect(smallest).toEqual({ patterns: 3, cycles: 10, lowerBound: 10, proven: true })
    expect([...budget.chosen].sort()).toEqual([1, 3, 4])
    expect((await runCli(['plan', nand, patterns, '--smallest-by', 'weight'])).code).toBe(2)
  })

  // 4 patterns are the smallest complete set of c17 (test-generation literature, from memory).
  it('finds the smallest complete set, and says whether it is proven', async () => {
    const plan = await planJson(c17, all32, '--order', 'smallest')
    expect(plan.smallest).toEqual({ patterns: 4, lowerBound: 4, proven: true })
    expect(plan.budget).toMatchObject({ patterns: 4, detected: 34 })
  })

  it('improves the choice at the cut and never makes it worse', async () => {
    const plain = await planJson(c17, all32, '--max-patterns', '3')
    const improved = await planJson(c17, all32, '--max-patterns', '3', '--improve')
    expect(improved.budget.patterns).toBeLessThanOrEqual(3)
    expect(improved.budget.detected).toBeGreaterThanOrEqual(plain.budget.detected)
    expect(improved.budget.detected).toBeLessThanOrEqual(improved.ceiling[2] ?? 0)
    expect(improved.gap).toBe((improved.ceiling[2] ?? 0) - improved.budget.detected)
    const goal = await planJson(c17, all32, '--min-coverage', '1', '--improve')
    expect(goal.budget).toMatchObject({ patterns: 4, detected: 34 })
  })

  it('takes a dear pattern alone where that beats all cheap ones', async () => {
    // By hand: 00 gains 1 fault in 1 cycle, 11 gains 3 in 4; within 4 cycles 11 alone detects more than 00 alone.
    const plan = await runJson(['plan', nand, '-', '--max-cycles', '4'], { stdin: '00 @1\n11 @4\n' })
    expect(plan['budget']).toMatchObject({ chosen: [2], detected: 3, cycles: 4 })
  })

  it('counts a fault once n patterns detect it', async () => {
    // By hand: y/0 alone is detected twice, by 00, 01 and 10.
    const plan = await planJson(nand, patterns, '--n', '2')
    expect(plan.budget).toMatchObject({ patterns: 2, detected: 1 })
  })

  it('weighs faults as it is told', async () => {
    const weights = file('w.csv', 'fault or block,weight\nb/1,10\n')
    const plan = await planJson(nand, patterns, '--weights', weights, '--max-patterns', '1')
    expect(plan.budget).toMatchObject({ chosen: [3], detected: 11 })
    expect(plan.budget.coverage).toBeCloseTo(11 / 15, 12)
  })

  it('keeps to constraints', async () => {
    const constraints = file('c.json', '{"keep": [1], "leaveOut": [3], "first": [2]}')
    const plan = await planJson(nand, patterns, '--constraints', constraints)
    expect(plan.budget.chosen.slice(0, 1)).toEqual([2])
    expect(plan.budget.chosen).toContain(1)
    expect(plan.budget.chosen).not.toContain(3)
    expect(plan.order).toHaveLength(4)
  })

  it('keeps bursts that the program list says must stay, and runs the one that must be first first', async () => {
    const one = file('one.vec', '00\n')
    const two = file('two.vec', '11\n01\n10\n')
    const program = file('program.csv', `burst,file,must stay,must be first\nparametric,one.vec,yes,yes\n`)
    const plan = await planJson(nand, one, two, '--program', program, '--max-patterns', '2')
    expect(plan.budget.chosen).toEqual([1, 2])
  })

  it('adds what the program list measured of other parts to every total', async () => {
    const program = file('other.csv', 'burst,measured ms,set-up ms\nanalogue,100,5\n')
    const plain = await planJson(nand, patterns)
    const plan = await planJson(nand, patterns, '--program', program)
    expect(plan.budget.perDeviceMilliseconds).toBeCloseTo(plain.budget.perDeviceMilliseconds + 105, 9)
  })

  // By hand: 3 vectors at 10 MHz are 0.0003 ms, and 2 ms of set-up; multi-site by the formula of four sites at 0.9:
  // T_4 = T_1 × (1 + 3 × 0.1), a quarter of it each (common practice, no source).
  it('reckons time by tester and product', async () => {
    const tester = file('t.json', '{"vectorMHz": 10, "sites": 4, "multiSiteEfficiency": 0.9, "indexMs": 0}')
    const product = file('p.json', '{"setupMs": 2}')
    const { budget } = await planJson(nand, patterns, '--tester', tester, '--product', product)
    expect(budget.milliseconds).toBeCloseTo(2.0003, 9)
    expect(budget.perDeviceMilliseconds).toBeCloseTo((2.0003 * 1.3) / 4, 9)
  })
})

describe('files of a plan', () => {
  const folder = dirname(file('out/keep', ''))

  it.each(['vec', 'csv', 'stil'])(
    'exports the chosen patterns as .%s, which read back to the same coverage',
    async (extension) => {
      const path = join(folder, `chosen.${extension}`)
      const plan = await planJson(c17, all32, '--max-patterns', '3', '--export', path)
      const back = await runJson(['coverage', c17, path])
      expect(back['patterns']).toMatchObject({ count: 3 })
      expect(back['detected']).toMatchObject({ total: plan.budget.detected })
      expect(back['curve']).toEqual(plan.curve.slice(0, 3))
      expect(back['expected']).toMatchObject({ mismatches: 0 })
    },
  )

  it.each([
    ['html', '<!doctype html'],
    ['pdf', '%PDF-'],
    ['xlsx', 'PK'],
    ['csv', ''],
  ])('writes the report as .%s', async (extension, start) => {
    const path = join(folder, `report.${extension}`)
    await planJson(c17, all32, '--max-patterns', '3', '--report', path)
    const bytes = readFileSync(path)
    expect(bytes.length).toBeGreaterThan(500)
    expect(bytes.subarray(0, start.length).toString('latin1').toLowerCase()).toBe(start.toLowerCase())
  })

  it('writes what each fault is worth under the budget beside the whole set', async () => {
    const path = join(folder, 'faults.csv')
    const patterns = file('four.vec', '00\n01\n10\n11\n')
    await planJson(nand, patterns, '--max-patterns', '2', '--faults', path)
    const rows = readFileSync(path, 'utf8').split('\n')
    expect(rows[0]).toBe('fault,state,first_pattern,detections,budget_detections,budget_first_place')
    expect(rows).toContain('y/0,detected,1,3,1,2')
    expect(rows).toContain('b/1,detected,3,1,0,')
  })

  it('writes a proof of the ceiling that a few lines check', async () => {
    const path = join(folder, 'proof.json')
    const { ceiling, budget } = await planJson(c17, all32, '--max-patterns', '2', '--proof', path)
    const proof = JSON.parse(readFileSync(path, 'utf8')) as {
      rows: [number, number, number, number[]][]
      columns: unknown[]
      otherWeight: number
      weightScale: number
      multiplierScale: number
    }
    // U(k) = Σ (w − λ) + the k largest of g_p, g_p = Σ λ over what p detects (Lagrangian dual of maximum coverage).
    const gains = proof.columns.map(() => 0)
    let rest = proof.otherWeight * proof.multiplierScale
    for (const [weight, , multiplier, columns] of proof.rows) {
      rest += weight * proof.multiplierScale - multiplier
      for (const column of columns) gains[column] = (gains[column] ?? 0) + multiplier
    }
    const largest = gains.sort((a, b) => b - a).slice(0, budget.patterns)
    const bound =
      (rest + largest.reduce((sum, gain) => sum + gain, 0)) / proof.multiplierScale / proof.weightScale
    expect(Math.floor(bound)).toBe(ceiling[budget.patterns - 1])
  })

  it('leaves nothing half-written behind', () => {
    expect(readdirSync(folder).filter((name) => name.endsWith('.part'))).toEqual([])
  })
})
