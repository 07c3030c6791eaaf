import { type NumberFormats, textOf } from '../../contract/format-number.ts'
import {
  answerPhrases,
  counted,
  countedWords,
  coverageWords,
  goalWords,
  MARKER_WORDS,
  shortfallsOf,
  stopWords,
} from '../../contract/plan-words.ts'
import type { PlanResult } from '../../engine/choose/plan-result.ts'
import type { PointFigures } from '../../engine/choose/point-figures.ts'
import { coverageChart } from '../charts/coverage-chart.ts'
import type { Block, LabelledFigure, ReportPage, Table } from '../report-document.ts'
import type { ReportInput } from '../report-input.ts'

/** Page 1: the answer, the chart that it is read from, five figures, why, and what moving the cut would do. */
export function answerPage(input: ReportInput, title: string, formats: NumberFormats): ReportPage {
  const { plan, counts } = input
  const shortfalls = shortfallsOf(plan, formats)
  return {
    blocks: [
      { kind: 'title', text: title },
      { kind: 'lead', phrases: answerPhrases(plan, formats) },
      ...shortfalls.map((text): Block => ({ kind: 'caution', text })),
      { kind: 'chart', chart: coverageChart(plan, formats), caption: chartCaption(input, formats) },
      { kind: 'figures', figures: fiveFigures(input, formats) },
      {
        kind: 'columns',
        widths: [1, 1.25],
        columns: [
          [
            { kind: 'heading', text: 'Why this cut' },
            { kind: 'text', text: whyWords(input, formats) },
          ],
          [
            { kind: 'heading', text: 'What moving it would do' },
            { kind: 'table', table: movesTable(input, formats) },
          ],
        ],
      },
      { kind: 'heading', text: 'Read with care' },
      { kind: 'text', text: `${CAUTION} ${careWords(input, formats)}` },
    ],
    foot: `Fault coverage: ${formats.count(counts.all).value} stuck-at faults on ${input.faultBase}, uncollapsed.`,
  }
}

function chartCaption({ plan, counts, faultBase }: ReportInput, formats: NumberFormats): string {
  const hasLimit = plan.limitStop !== null
  const hasGoal = plan.goals.some(({ kind }) => kind === 'coverage')
  const inside = [hasLimit ? 'inside the limit' : '', hasGoal ? 'above the goal' : ''].filter(Boolean)
  return [
    `${coverageWords(plan)} against patterns applied. Base: ${formats.count(counts.all).value} stuck-at faults on ${faultBase}, uncollapsed.`,
    inside.length > 0 ? `White: ${inside.join(' and ')}.` : '',
    plan.ceiling.length > 0
      ? `Hatched: proven out of reach for any choice of these patterns${plan.sample === undefined ? '' : ', of the faults drawn'}.`
      : '',
    plan.sample !== undefined && !plan.isWeighted
      ? 'Band: where the curve of all faults lies, at 3 sigma.'
      : '',
  ]
    .filter(Boolean)
    .join(' ')
}

function fiveFigures({ plan, pricing }: ReportInput, formats: NumberFormats): readonly LabelledFigure[] {
  const { budget, limits, goals } = plan
  const { tester } = pricing
  const limit = limits.find(({ kind }) => kind === 'milliseconds')
  const coverageGoal = goals.find((goal) => goal.kind === 'coverage')
  const dppmGoal = goals.find((goal) => goal.kind === 'dppm')
  const band = `${formats.dppm(budget.dppmLow).value} to ${formats.dppm(budget.dppmHigh).value}`
  const guarded = `${formats.milliseconds(budget.guardedMilliseconds).value} with ${formats.plain(pricing.product.guardBand * 100)} % in hand`
  return [
    {
      label: 'Time on one site',
      figure: formats.milliseconds(budget.milliseconds),
      note: limit === undefined ? guarded : `limit ${formats.milliseconds(limit.most).value}, ${guarded}`,
    },
    {
      label: 'Fault coverage',
      figure: formats.coverage(budget.plainCoverage),
      note:
        coverageGoal === undefined
          ? `${textOf(formats.coverage(budget.testCoverage))} of testable`
          : `goal ${formats.coverage(coverageGoal.least).value}`,
    },
    {
      label: 'Escape rate, estimated',
      figure: formats.dppm(budget.dppm),
      note: dppmGoal === undefined ? band : `at most ${formats.dppm(dppmGoal.most).value}`,
    },
    memoryFigure(budget, tester.vectorMemory, formats),
    budget.hoursPerYear === null
      ? {
          label: 'Cost of test',
          figure: { ...formats.costPerThousand(budget.costPerDevice, tester.currency), unit: '' },
          note: 'per 1,000 devices',
        }
      : {
          label: 'Tester hours a year',
          figure: formats.hours(budget.hoursPerYear),
          note: textOf(formats.money(budget.testCostPerYear, tester.currency)),
        },
  ]
}

function memoryFigure(
  { vectorMemory, reloads }: PointFigures,
  depth: number | null,
  formats: NumberFormats,
): LabelledFigure {
  if (depth === null) {
    return {
      label: 'Vector memory',
      figure: formats.count(vectorMemory),
      note: 'cycles per pin, no limit given',
    }
  }
  const again = reloads > 0 ? `, ${formats.count(reloads).value} reloads` : ''
  return {
    label: 'Vector memory',
    figure: formats.share(vectorMemory / depth),
    note: `of ${formats.count(depth).value} cycles${again}`,
  }
}

function whyWords({ plan }: ReportInput, formats: NumberFormats): string {
  const { budget, goals, asDelivered, ceiling, gap } = plan
  const count = (value: number): string => formats.count(value).value
  const reasons: string[] = []
  const [goal] = goals
  if (goal !== undefined && plan.isReached) {
    reasons.push(`It is the fewest patterns of this order that reach ${goalWords(goal, formats)}.`)
  } else if (plan.cut.stop !== null) {
    reasons.push(`It is as much of this order as ${stopWords(plan.cut.stop, formats)} lets run.`)
  } else if (goals.length === 0) {
    reasons.push('It holds every pattern of this order that detects something more.')
  }
  if (plan.orderName !== 'as-delivered' && asDelivered.sameDetected !== null && budget.detected > 0) {
    const { patterns, milliseconds } = asDelivered.sameDetected
    reasons.push(
      `As delivered, the set needs ${counted(patterns, 'pattern', formats)} and ${textOf(formats.milliseconds(milliseconds))} to detect as much.`,
    )
  }
  const bound = ceiling[budget.patterns - 1]
  if (bound !== undefined) {
    reasons.push(
      `No choice of ${counted(budget.patterns, 'pattern', formats)} can detect more than ${count(bound)} ${countedWords(plan)}; this one detects ${count(budget.detected)}${withinWords(bound, budget.detected, formats)}.`,
    )
  }
  if (gap !== null && gap > 0 && plan.cut.stop !== null) {
    reasons.push(`Under the same limit no choice could add more than ${count(gap)} ${countedWords(plan)}.`)
  }
  return reasons.join(' ')
}

function withinWords(bound: number, detected: number, formats: NumberFormats): string {
  if (bound <= detected) return ', which is proven best'
  return `, within ${textOf(formats.coverage((bound - detected) / bound))} of it`
}

function movesTable({ plan }: ReportInput, formats: NumberFormats): Table {
  const { budget, markers } = plan
  const rows: { name: string; figures: PointFigures; isBudget: boolean }[] = [
    { name: 'This budget', figures: budget, isBudget: true },
  ]
  for (const { name, figures } of markers) {
    if (rows.every((row) => row.figures.patterns !== figures.patterns)) {
      const isWorth = name === 'next millisecond'
      const words = isWorth
        ? `Next ms buys < ${textOf(formats.coverage(plan.worthOfMillisecond))}`
        : MARKER_WORDS[name]
      rows.push({ name: words, figures, isBudget: false })
    }
  }
  rows.sort((a, b) => a.figures.patterns - b.figures.patterns)
  return {
    columns: [
      { head: '', holds: 'text' },
      { head: 'Patterns', holds: 'number' },
      { head: 'ms', holds: 'number' },
      { head: 'Coverage,\u00a0%', holds: 'number' },
      { head: 'DPPM', holds: 'number' },
    ],
    rows: rows.map(({ name, figures }) => [
      name,
      formats.count(figures.patterns).value,
      formats.milliseconds(figures.milliseconds).value,
      formats.coverage(figures.coverage).value,
      formats.dppm(figures.dppm).value,
    ]),
    marked: rows.findIndex(({ isBudget }) => isBudget),
  }
}

/** Stands on page 1 of every report and in every workbook. */
export const CAUTION =
  'All figures are estimates of a model. This plan is no safety case: where the part can hurt someone, the governing standard and the people licensed to apply it decide.'

function sampleWords({ sample }: PlanResult, formats: NumberFormats): string {
  if (sample === undefined) return ''
  const { coverageLow, coverageHigh, dppmLow, dppmHigh } = sample.atCut
  return [
    `Coverage is estimated from ${formats.count(sample.size).value} of the ${formats.count(sample.population).value} faults that the whole set detects, drawn at random (seed ${sample.seed}); the order was chosen on as many others. `,
    `With all of them it lies between ${textOf(formats.coverage(coverageLow))} and ${textOf(formats.coverage(coverageHigh))} (3 sigma, Wilson 1927)${dppmLow === null ? '' : `, which alone is ${formats.dppm(dppmLow).value} to ${textOf(formats.dppm(dppmHigh))}`}. `,
  ].join('')
}

function careWords({ plan, pricing }: ReportInput, formats: NumberFormats): string {
  const { budget } = plan
  const model =
    pricing.product.model === 'williams-brown'
      ? 'Williams and Brown (1981), 1 − Y^(1−T),'
      : `Agrawal, Seth and Agrawal (1982) with ${formats.plain(pricing.product.n0)} faults on a defective device,`
  const band = `${formats.dppm(budget.dppmLow).value} to ${textOf(formats.dppm(budget.dppmHigh))}`
  const origin = plan.yield.origin === 'assumed' ? ' (assumed, not measured)' : ''
  return [
    sampleWords(plan, formats),
    `The escape rate follows ${model} with yield Y = ${textOf(formats.share(pricing.trueYield))}${origin} `,
    `and T the test coverage, ${textOf(formats.coverage(budget.testCoverage))}; over both models and the ranges of their inputs it runs from ${band}. `,
    'It counts stuck-at faults only. ',
  ].join('')
}
