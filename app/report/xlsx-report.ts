import writeExcelFile, { type Cell, type Row, type Sheet } from 'write-excel-file/node'
import { numberFormats } from '../contract/format-number.ts'
import { answerPhrases, INPUT_WORDS, MARKER_WORDS, shortfallsOf } from '../contract/plan-words.ts'
import type { PointFigures } from '../engine/choose/point-figures.ts'
import { PRODUCT_FIELDS } from '../engine/quality/product.ts'
import type { AssumptionField } from '../engine/tester/assumption-field.ts'
import { TESTER_FIELDS } from '../engine/tester/tester.ts'
import { CAUTION } from './pages/answer-page.ts'
import { patternColumns } from './pattern-columns.ts'
import { printable } from './printable.ts'
import type { ReportInput } from './report-input.ts'

/** Places of the order in the sheet of patterns: more would take a spreadsheet, and us, too long. */
const MOST_ROWS = 20_000

const formats = numberFormats('en')

/** Returns a plan as a workbook: every figure a number in full precision, shown with the digits that it deserves. */
export async function xlsxReport(input: ReportInput): Promise<Uint8Array> {
  const sheets = [
    summarySheet(input),
    patternSheet(input),
    assumptionSheet(input),
    sensitivitySheet(input),
    ...(input.lost === null ? [] : [lostSheet(input)]),
    reproduceSheet(input),
  ]
  return new Uint8Array(await writeExcelFile(sheets).toBuffer())
}

type BookSheet = Sheet<Buffer>

function summarySheet(input: ReportInput): BookSheet {
  const { plan, pricing, title } = input
  const { currency } = pricing.tester
  const answer = answerPhrases(plan, formats)
    .map(({ text }) => text)
    .join('')
  const columns: [string, PointFigures][] = [
    ['This budget', plan.budget],
    ...plan.markers.map(({ name, figures }): [string, PointFigures] => [MARKER_WORDS[name], figures]),
    ['As delivered, same limits', plan.asDelivered.sameLimits],
  ]
  const rows = FIGURES.filter(({ key }) => plan.budget[key] !== null)
  return {
    sheet: 'Summary',
    columns: [{ width: 44 }, ...columns.map(() => ({ width: 18 }))],
    data: [
      [{ value: printable(title ?? 'Test budget'), fontWeight: 'bold', fontSize: 16 }],
      [text(`${input.subject}, ${input.date}`)],
      [text(answer)],
      ...shortfallsOf(plan, formats).map((sentence): Row => [text(`No. ${sentence}`)]),
      [],
      [head(''), ...columns.map(([name]) => head(name, true))],
      ...rows.map(({ key, label, format }): Row => [
        text(label.replace('money', currency)),
        ...columns.map(([, figures]) => number(figures[key], format)),
      ]),
      [],
      ...(plan.order.length > MOST_ROWS ? [[text(shortenedWords(plan.order.length))]] : []),
      [text(CAUTION)],
    ],
  }
}

function shortenedWords(patterns: number): string {
  return `The sheet of patterns holds the first ${formats.count(MOST_ROWS).value} of ${formats.count(patterns).value}; all are in the CSV report.`
}

type FigureRow = { readonly key: keyof PointFigures; readonly label: string; readonly format: string }

const FIGURES: readonly FigureRow[] = [
  { key: 'patterns', label: 'Patterns', format: '#,##0' },
  { key: 'detected', label: 'Detected faults, or their weight', format: '#,##0' },
  { key: 'coverage', label: 'Coverage', format: '0.000%' },
  { key: 'testCoverage', label: 'Test coverage', format: '0.000%' },
  { key: 'cycles', label: 'Tester cycles', format: '#,##0' },
  { key: 'milliseconds', label: 'These patterns on one site, ms', format: '#,##0.000' },
  { key: 'guardedMilliseconds', label: 'The same with guard band, ms', format: '#,##0.000' },
  { key: 'perDeviceMilliseconds', label: 'Whole program per device, ms', format: '#,##0.000' },
  {
    key: 'meanPerDeviceMilliseconds',
    label: 'The same, stopping at the first fail, ms',
    format: '#,##0.000',
  },
  { key: 'vectorMemory', label: 'Vector memory, cycles per pin', format: '#,##0' },
  { key: 'scanMemory', label: 'Scan memory, cycles per pin', format: '#,##0' },
  { key: 'reloads', label: 'Reloads', format: '#,##0' },
  { key: 'dppm', label: 'Escape rate, estimated DPPM', format: '#,##0.0' },
  { key: 'dppmLow', label: 'Escape rate, low end of the band', format: '#,##0.0' },
  { key: 'dppmHigh', label: 'Escape rate, high end of the band', format: '#,##0.0' },
  { key: 'dppmWilliamsBrown', label: 'Escape rate by Williams and Brown', format: '#,##0.0' },
  { key: 'dppmAgrawalSethAgrawal', label: 'Escape rate by Agrawal, Seth and Agrawal', format: '#,##0.0' },
  { key: 'costPerDevice', label: 'Cost of test per device, money', format: '0.000000' },
  { key: 'testedPerYear', label: 'Tests a year', format: '#,##0' },
  { key: 'hoursPerYear', label: 'Tester hours of use a year', format: '#,##0.0' },
  { key: 'capacityHoursPerYear', label: 'Tester hours of capacity a year', format: '#,##0.0' },
  { key: 'testCostPerYear', label: 'Cost of test a year, money', format: '#,##0' },
  { key: 'escapeCostPerYear', label: 'Cost of escapes a year, estimated, money', format: '#,##0' },
  { key: 'totalPerYear', label: 'Total a year, money', format: '#,##0' },
]

function patternSheet(input: ReportInput): BookSheet {
  const columns = patternColumns(input)
  const shown = Math.min(input.plan.order.length, MOST_ROWS)
  const rows = Array.from({ length: shown }, (_, place): Row =>
    columns.map(({ at, format }) => number(at(place + 1), format)),
  )
  return {
    sheet: 'Patterns',
    stickyRowsCount: 1,
    columns: columns.map(({ head: name }) => ({ width: Math.max(10, name.length + 1) })),
    data: [columns.map(({ head: name }) => head(name, true)), ...rows],
  }
}

function assumptionSheet({ pricing }: ReportInput): BookSheet {
  const { tester, product } = pricing
  return {
    sheet: 'Assumptions',
    stickyRowsCount: 1,
    columns: [{ width: 10 }, { width: 22 }, { width: 34 }, { width: 20 }, { width: 18 }, { width: 90 }],
    data: [
      ['File', 'Key', 'Assumption', 'Value', 'Unit', 'What it is'].map((name) => head(name)),
      ...fieldRows('tester', TESTER_FIELDS, tester, tester.currency),
      ...fieldRows('product', PRODUCT_FIELDS, product, tester.currency),
    ],
  }
}

function fieldRows<Values>(
  file: string,
  fields: readonly AssumptionField<Values>[],
  values: Values,
  currency: string,
): Row[] {
  return fields.map(({ key, label, unit, nullMeans, explanation }) => {
    const value = values[key]
    const shown =
      value === null
        ? text(nullMeans)
        : typeof value === 'number'
          ? number(value, 'General')
          : text(typeof value === 'string' ? value : JSON.stringify(value))
    return [
      text(file),
      text(key),
      text(label),
      shown,
      text(unit.replace('money', currency)),
      text(explanation),
    ]
  })
}

function sensitivitySheet({ plan }: ReportInput): BookSheet {
  const heads = [
    'Input',
    'Value',
    'Cut',
    'DPPM',
    'Per device, ms',
    'Cost per device',
    'Total a year',
    'Cut of least total',
    'Least total',
  ]
  const rows = plan.sensitivity.flatMap(({ input, low, high }) =>
    [low, high].map(({ value, outcome }): Row => [
      text(INPUT_WORDS[input]),
      number(value, 'General'),
      number(outcome.patterns, '#,##0'),
      number(outcome.dppm, '#,##0.0'),
      number(outcome.perDeviceMilliseconds, '#,##0.000'),
      number(outcome.costPerDevice, '0.000000'),
      number(outcome.totalPerYear, '#,##0'),
      number(outcome.leastTotalPatterns, '#,##0'),
      number(outcome.leastTotal, '#,##0'),
    ]),
  )
  return {
    sheet: 'Sensitivity',
    stickyRowsCount: 1,
    columns: heads.map((name, at) => ({ width: at === 0 ? 30 : Math.max(12, name.length + 2) })),
    data: [heads.map((name, at) => head(name, at > 0)), ...rows],
  }
}

function lostSheet({ lost }: ReportInput): BookSheet {
  const heads = [
    'Block',
    'Faults',
    'Detected',
    'Lost',
    'Cheapest pattern',
    'Its cycles',
    'Faults it brings back',
  ]
  const rows = [...(lost ?? [])]
    .sort((a, b) => b.lost - a.lost)
    .map(({ block, faults, detected, lost: gone, cheapest }): Row => [
      text(block),
      ...[faults, detected, gone, cheapest?.pattern, cheapest?.cycles, cheapest?.faults].map((value) =>
        number(value ?? null, '#,##0'),
      ),
    ])
  return {
    sheet: 'Faults lost',
    stickyRowsCount: 1,
    columns: heads.map((name, at) => ({ width: at === 0 ? 40 : name.length + 3 })),
    data: [heads.map((name, at) => head(name, at > 0)), ...rows],
  }
}

function reproduceSheet({
  files,
  options,
  version,
  commandLine,
  circuit,
  counts,
  notices,
}: ReportInput): BookSheet {
  const pairs: [string, string][] = [
    ['Circuit', circuit.name],
    ...options.map(({ label, value }): [string, string] => [label, value]),
    ['Tallycut', version],
    ['Command', commandLine],
    ...notices.map((notice): [string, string] => ['Warning', notice]),
  ]
  return {
    sheet: 'Reproduce',
    columns: [{ width: 24 }, { width: 60 }, { width: 14 }, { width: 70 }],
    data: [
      ['Role', 'File', 'Bytes', 'SHA-256'].map((name) => head(name)),
      ...files.map(({ role, name, sizeBytes, sha256 }): Row => [
        text(role),
        text(name),
        number(sizeBytes, '#,##0'),
        text(sha256),
      ]),
      [],
      [text('Faults, uncollapsed'), number(counts.all, '#,##0')],
      [text('Proven untestable'), number(counts.untestable, '#,##0')],
      [text('By the chain test'), number(counts.byChainTest, '#,##0')],
      ...pairs.map(([name, value]): Row => [text(name), text(value)]),
    ],
  }
}

function text(value: string): Cell {
  return { value: printable(value), type: String }
}

function number(value: number | null, format: string): Cell {
  if (value === null) return null
  return format === 'General' ? { value, type: Number } : { value, type: Number, format }
}

function head(name: string, isNumber = false): Cell {
  return {
    value: printable(name),
    type: String,
    fontWeight: 'bold',
    align: isNumber ? 'right' : 'left',
    bottomBorderStyle: 'thin',
    wrap: true,
  }
}
