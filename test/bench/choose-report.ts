/**
 * Prints, for every ISCAS-85 circuit beside the repository under 1,000 random patterns, how many patterns each order takes
 * to given coverages, how far from the ceiling it is there, and the smallest complete set with its bound.
 * Usage: node test/bench/choose-report.ts [seconds for each smallest set] [circuit …]
 */
import { readdirSync } from 'node:fs'
import { resolve } from 'node:path'
import { ceilingOf, patternBudgets } from '../../app/engine/choose/ceiling.ts'
import { curveOf } from '../../app/engine/choose/coverage-curve.ts'
import { deliveredOrder } from '../../app/engine/choose/delivered-order.ts'
import { smallestCompleteSet } from '../../app/engine/choose/smallest-complete-set.ts'
import { steepestFirst, steepestWithin } from '../../app/engine/choose/steepest-first.ts'
import { createHighsSolver } from '../../app/workers/highs-solver.ts'
import { readData } from '../helpers/data.ts'
import { freeTask } from '../helpers/detection-matrix.ts'
import { randomRun } from '../helpers/random-run.ts'

const PATTERNS = 1000
const SEED = 1
const GOALS = [0.9, 0.95, 0.99]

const [limit = '60', ...wanted] = process.argv.slice(2)
const folder = resolve(import.meta.dirname, '../../../shared/data/circuits/iscas85')
const circuits = readdirSync(folder)
  .filter(
    (file) => file.endsWith('.bench') && (wanted.length === 0 || wanted.includes(file.replace('.bench', ''))),
  )
  .sort((a, b) => Number(/\d+/.exec(a)) - Number(/\d+/.exec(b)))
const solveMip = createHighsSolver()

console.log(
  `${PATTERNS} random patterns, seed ${SEED}; uncollapsed faults, base: lines. Each entry: patterns needed (faults under the`,
)
console.log(
  'ceiling for as many patterns); "–" where the set does not reach the coverage. The last row: fewest by the ceiling.\n',
)
console.log('| circuit | faults detected | order | 90 % | 95 % | 99 % | all detected | seconds |')
console.log('|---|---|---|---|---|---|---|---|')
for (const file of circuits) {
  const { faults, matrix, weights } = randomRun(readData(`circuits/iscas85/${file}`), PATTERNS, SEED)
  const task = freeTask(matrix, { weights })
  const all = weights.reduce((sum, weight) => sum + weight, 0)
  const goals = [...GOALS.map((goal) => goal * faults.nFaults), all]
  const timed = <T>(work: () => T | null): [T, string] => {
    const start = performance.now()
    const result = work()
    if (result === null) throw new Error('the work ended early')
    return [result, ((performance.now() - start) / 1000).toFixed(2)]
  }
  const start = performance.now()
  const until = (): boolean => performance.now() - start < 1000 * Number(limit)
  const [ceiling, ceilingSeconds] = timed(() => ceilingOf(task, patternBudgets(PATTERNS)))
  const [steepest, steepestSeconds] = timed(() => steepestFirst(task))
  const [smallest, smallestSeconds] = timed(() => smallestCompleteSet(task, { solveMip, onProgress: until }))
  const rows = [
    { name: 'as delivered', order: deliveredOrder(task.rules), seconds: '' },
    { name: 'steepest first', order: steepest, seconds: steepestSeconds },
    {
      name: 'smallest complete set',
      order: steepestWithin(task, 'smallest', smallest.patterns),
      seconds: smallestSeconds,
    },
  ]
  for (const { name, order, seconds } of rows) {
    const { detected } = curveOf(task, order, faults.nFaults)
    const cells = goals.map((goal) => {
      const k = detected.findIndex((weight) => weight >= goal)
      return k < 0 ? '–' : `${k} (${ceiling.bounds[k - 1] - detected[k]})`
    })
    const head =
      name === 'as delivered' ? `${file.replace('.bench', '')} | ${all} of ${faults.nFaults}` : ' | '
    console.log(`| ${head} | ${name} | ${cells.join(' | ')} | ${seconds} |`)
  }
  const fewest = goals.map((goal) => {
    const k = ceiling.bounds.findIndex((bound) => bound >= goal) + 1
    return k === 0 ? '–' : String(k)
  })
  const { cost, lowerBound, proven } = smallest
  const verdict = proven ? `${cost}, proven` : `${cost}, at least ${lowerBound}`
  console.log(
    `|  |  | no order needs fewer | ${fewest.slice(0, -1).join(' | ')} | ${verdict} | ${ceilingSeconds} |`,
  )
}
