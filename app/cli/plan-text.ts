import { textOf } from '../contract/format-number.ts'
import { answerPhrases, countedWords } from '../contract/plan-words.ts'
import type { CoverageRun } from '../services/on-files/coverage-of-files.ts'
import type { PlanResult } from '../engine/choose/plan-result.ts'
import type { PlanOfFiles } from '../services/on-files/plan-of-files.ts'
import { aligned, formats } from './print-text.ts'

type Smallest = NonNullable<PlanResult['smallest']>

function smallestWords({ patterns, cycles, lowerBound, proven }: Smallest): string {
  const { count } = formats
  const [taken, unit] = cycles === undefined ? ['', ''] : [`, ${count(cycles).value} cycles`, ' cycles']
  return `${count(patterns).value} patterns${taken}${proven ? ', proven' : `, at least ${count(lowerBound).value}${unit}`}`
}

/** A plan for people: the answer in a sentence, and the figures of the cut. */
export function planText(run: CoverageRun, { plan, improvement }: PlanOfFiles): string {
  const { result, pricing } = plan
  const { budget, ceiling, gap, smallest, sample } = result
  const { count, coverage, milliseconds, dppm, costPerThousand } = formats
  const bound = ceiling[budget.patterns - 1]
  const rows: [string, string][] = [
    [
      'Circuit',
      `${run.netlist.circuit.name}, ${count(run.faults.nFaults).value} faults on ${run.faults.base}`,
    ],
    ['Patterns', `${count(budget.patterns).value} of ${count(result.order.length).value}`],
    [
      'Detected',
      `${count(budget.detected).value} of ${count(result.total).value} ${countedWords(result)}, ${textOf(coverage(budget.coverage))}`,
    ],
  ]
  if (sample !== undefined) {
    const { coverageLow, coverageHigh, dppmLow, dppmHigh } = sample.atCut
    rows.push([
      'Sample',
      `${count(sample.size).value} of ${count(sample.population).value} detectable faults: with all of them it lies between ${coverage(coverageLow).value} and ${textOf(coverage(coverageHigh))} (3 sigma)${dppmLow === null ? '' : `, ${dppm(dppmLow).value} and ${textOf(dppm(dppmHigh))}`}`,
    ])
  }
  if (bound !== undefined) {
    rows.push([
      'Ceiling',
      `no choice of ${count(budget.patterns).value} of these patterns detects more than ${count(bound).value}${sample === undefined ? '' : ', by the faults drawn'}`,
    ])
  }
  if (gap !== null && gap > 0)
    rows.push(['Gap', `${count(gap).value} below the ceiling under what ends the cut`])
  if (smallest !== undefined) {
    rows.push(['Smallest set', smallestWords(smallest)])
  }
  if (improvement !== null) {
    rows.push([
      'Improvement',
      improvement.patternsSaved > 0
        ? `${count(improvement.patternsSaved).value} patterns fewer than the order alone`
        : `${count(improvement.gained).value} more than the order alone`,
    ])
  }
  const { currency } = pricing.tester
  rows.push(
    ['Tester cycles', count(budget.cycles).value],
    [
      'Time',
      `${textOf(milliseconds(budget.milliseconds))} on one site; ${textOf(milliseconds(budget.perDeviceMilliseconds))} a device for the whole program`,
    ],
    [
      'Vector memory',
      `${count(budget.vectorMemory).value} cycles a pin, ${count(budget.reloads).value} reloads`,
    ],
    [
      'Escapes',
      `${textOf(dppm(budget.dppm))}, ${dppm(budget.dppmLow).value} to ${textOf(dppm(budget.dppmHigh))} over models and inputs`,
    ],
    ['Cost of test', textOf(costPerThousand(budget.costPerDevice, currency))],
  )
  const answer = answerPhrases(result, formats)
    .map(({ text }) => text)
    .join('')
  return `${answer}\n\n${aligned(rows)}\n\nEscapes and cost are estimates of models, no safety case.`
}
