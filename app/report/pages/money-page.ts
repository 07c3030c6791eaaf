import { type NumberFormats, textOf } from '../../contract/format-number.ts'
import { INPUT_WORDS } from '../../contract/plan-words.ts'
import type { InsertionResult, MovedOutcome, TimeOutcome } from '../../engine/choose/plan-result.ts'
import type { WhatIfGrid } from '../../engine/quality/what-if.ts'
import { moneyChart } from '../charts/money-chart.ts'
import { sensitivityChart, type SensitivityMeasure } from '../charts/sensitivity-chart.ts'
import type { Block, ReportPage, Table } from '../report-document.ts'
import type { ReportInput } from '../report-input.ts'

/** What the cut costs, how firm that is, and what other testers and chains would change. */
export function moneyPage(input: ReportInput, formats: NumberFormats): ReportPage {
  const { plan, priced, pricing } = input
  const { budget, whatIf } = plan
  const { currency } = pricing.tester
  const cheapest = plan.markers.find(({ name }) => name === 'least total')?.figures.patterns ?? 0
  const all = plan.markers.find(({ name }) => name === 'all')?.figures.patterns ?? plan.order.length
  const chart = moneyChart(priced, budget.patterns, cheapest, all, currency, formats)
  const blocks: Block[] = [
    { kind: 'title', text: 'What it costs, and how firm that is' },
    { kind: 'text', text: moneyWords(input, formats) },
  ]
  if (chart !== null) {
    blocks.push({
      kind: 'chart',
      chart,
      caption: 'Cost of test and of escapes a year, and their sum, against patterns applied.',
    })
  }
  const measure = measureOf(input, formats)
  blocks.push(
    { kind: 'heading', text: `What moves ${measure.name}` },
    {
      kind: 'chart',
      chart: sensitivityChart(plan.sensitivity, measure, formats),
      caption:
        'Each input alone at the low (outlined) and the high end (filled) of its range, this cut kept: the ranges given, else ± 20 %, for the yield 20 % more and fewer defects.',
    },
    { kind: 'table', table: movesTable(input, formats) },
    { kind: 'heading', text: 'Time per device with other equipment, ms' },
  )
  if (plan.insertions !== null) {
    blocks.splice(
      -1,
      0,
      { kind: 'heading', text: 'Insertions' },
      { kind: 'table', table: insertionTable(plan.insertions, pricing.tester.currency, formats) },
    )
  }
  const sites = gridTable(whatIf.sitesByEfficiency, 'Sites', (value) => `E ${formats.plain(value)}`, formats)
  if (whatIf.chainsByShiftRate === null) blocks.push({ kind: 'table', table: sites })
  else {
    const chains = gridTable(
      whatIf.chainsByShiftRate,
      'Chains',
      (rate) => `${formats.plain(rate)} MHz`,
      formats,
    )
    blocks.push({
      kind: 'columns',
      widths: [1, 1.15],
      columns: [[{ kind: 'table', table: chains }], [{ kind: 'table', table: sites }]],
    })
  }
  return { blocks, foot: 'E: multi-site efficiency. Money in the tester’s currency.' }
}

function moneyWords({ plan, pricing }: ReportInput, formats: NumberFormats): string {
  const { budget } = plan
  const { tester, product } = pricing
  const money = (sum: number | null): string => textOf(formats.money(sum, tester.currency))
  const words = [
    `A device takes ${textOf(formats.milliseconds(budget.perDeviceMilliseconds))} of tester and costs ${textOf(formats.costPerThousand(budget.costPerDevice, tester.currency))}.`,
    `Where the program stops at the first fail it takes ${textOf(formats.milliseconds(budget.meanPerDeviceMilliseconds))} in the mean.`,
  ]
  if (budget.testedPerYear === null) {
    words.push('How many are shipped a year is not given, so nothing is worked out for a year.')
  } else {
    words.push(
      `For ${formats.count(product.shippedPerYear).value} shipped a year, ${formats.count(Math.ceil(budget.testedPerYear)).value} tests take ${textOf(formats.hours(budget.hoursPerYear))} of use (${textOf(formats.hours(budget.capacityHoursPerYear))} of capacity) and cost ${money(budget.testCostPerYear)}.`,
    )
  }
  if (budget.totalPerYear !== null) {
    words.push(
      `Escapes cost an estimated ${money(budget.escapeCostPerYear)}, together ${money(budget.totalPerYear)}.`,
    )
  } else if (budget.testedPerYear !== null) {
    words.push('What an escape costs is not given, so the cost of escapes is not worked out.')
  }
  return words.join(' ')
}

function measureOf(
  { plan, pricing }: ReportInput,
  formats: NumberFormats,
): SensitivityMeasure & { name: string } {
  const { budget } = plan
  const { currency } = pricing.tester
  if (budget.totalPerYear !== null) {
    return {
      name: 'the total a year',
      now: budget.totalPerYear,
      of: ({ totalPerYear }: MovedOutcome) => totalPerYear ?? 0,
      written: (sum) => textOf(formats.money(sum, currency)),
    }
  }
  return {
    name: 'the escape rate',
    now: budget.dppm,
    of: ({ dppm }: MovedOutcome) => dppm,
    written: (parts) => textOf(formats.dppm(parts)),
  }
}

function movesTable({ plan }: ReportInput, formats: NumberFormats): Table {
  const hasTotal = plan.budget.totalPerYear !== null
  const fromTo = (low: number | null, high: number | null, show: (value: number | null) => string): string =>
    show(low) === show(high) ? show(low) : `${show(low)} to ${show(high)}`
  const count = (value: number | null): string => formats.count(value).value
  return {
    columns: [
      { head: 'Input, over its range', holds: 'text' },
      { head: 'DPPM', holds: 'number' },
      { head: 'ms a device', holds: 'number' },
      { head: 'Cut, same limits and goals', holds: 'number' },
      ...(hasTotal ? [{ head: 'Cut of least total', holds: 'number' } as const] : []),
    ],
    rows: plan.sensitivity.map(({ input, low, high }) => [
      INPUT_WORDS[input],
      fromTo(low.outcome.dppm, high.outcome.dppm, (value) => formats.dppm(value).value),
      fromTo(
        low.outcome.perDeviceMilliseconds,
        high.outcome.perDeviceMilliseconds,
        (value) => formats.milliseconds(value).value,
      ),
      fromTo(low.outcome.patterns, high.outcome.patterns, count),
      ...(hasTotal ? [fromTo(low.outcome.leastTotalPatterns, high.outcome.leastTotalPatterns, count)] : []),
    ]),
    marked: null,
  }
}

function insertionTable(steps: readonly InsertionResult[], currency: string, formats: NumberFormats): Table {
  return {
    columns: [
      { head: '', holds: 'text' },
      { head: 'Patterns', holds: 'number' },
      { head: 'Test coverage, %', holds: 'number' },
      { head: 'Yield in, %', holds: 'number' },
      { head: 'Passing, %', holds: 'number' },
      { head: 'ms a device', holds: 'number' },
      { head: 'Tests per 1,000 shipped', holds: 'number' },
      { head: `Cost per 1,000 shipped, ${currency}`, holds: 'number' },
    ],
    rows: steps.map((step) => [
      step.name,
      formats.count(step.patterns).value,
      formats.coverage(step.testCoverage).value,
      formats.share(step.yieldIn).value,
      formats.share(step.passFraction).value,
      formats.milliseconds(step.perDeviceMilliseconds).value,
      formats.count(step.testedPerShipped * 1000).value,
      formats.costPerThousand(step.costPerShipped, '').value,
    ]),
    marked: null,
  }
}

function gridTable(
  grid: WhatIfGrid<TimeOutcome>,
  rowHead: string,
  columnHead: (value: number) => string,
  formats: NumberFormats,
): Table {
  return {
    columns: [
      { head: rowHead, holds: 'number' },
      ...grid.columns.map((value) => ({ head: columnHead(value), holds: 'number' }) as const),
    ],
    rows: grid.rows.map((value, at) => [
      formats.count(value).value,
      ...(grid.outcomes[at] ?? []).map(
        ({ perDeviceMilliseconds }) => formats.milliseconds(perDeviceMilliseconds).value,
      ),
    ]),
    marked: null,
  }
}
