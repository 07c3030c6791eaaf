import { type NumberFormats, textOf } from '../../contract/format-number.ts'
import {
  type AreaShare,
  type InputRanges,
  type PlannedInsertion,
  type Product,
  PRODUCT_FIELDS,
} from '../../engine/quality/product.ts'
import type { BandInput } from '../../engine/quality/escape-band.ts'
import type { YieldOrigin } from '../../engine/quality/yield.ts'
import type { AssumptionField } from '../../engine/tester/assumption-field.ts'
import { type Tester, TESTER_FIELDS } from '../../engine/tester/tester.ts'
import type { ReportPage, Table } from '../report-document.ts'
import type { ReportInput } from '../report-input.ts'

/** What every figure assumes, and the formulas with their sources. */
export function assumptionsPage(input: ReportInput, formats: NumberFormats): ReportPage {
  const { pricing, plan } = input
  const { tester, product, time, trueYield, restMs } = pricing
  const used = [
    `Yield ${textOf(formats.share(trueYield))}: ${YIELD_WORDS[plan.yield.origin]}.`,
    time.isScan
      ? `${formats.count(time.chains).value} scan ${time.chains === 1 ? 'chain' : 'chains'}, the longest of ${formats.count(time.chainLength).value} bits.`
      : 'Not scanned: one vector a pattern, or as many as the pattern says.',
    `The rest of the program takes ${textOf(formats.milliseconds(restMs))} on one site.`,
  ]
  return {
    blocks: [
      { kind: 'title', text: 'What the figures assume' },
      { kind: 'text', text: used.join(' ') },
      {
        kind: 'columns',
        widths: [1, 1.2],
        columns: [
          [
            { kind: 'heading', text: 'Tester' },
            {
              kind: 'table',
              table: fieldTable(TESTER_FIELDS, (key) => tester[key], tester.currency, formats),
            },
            { kind: 'heading', text: 'How firm the escape rate is' },
            { kind: 'text', text: bandWords(input, formats) },
          ],
          [
            { kind: 'heading', text: 'Product' },
            {
              kind: 'table',
              table: fieldTable(PRODUCT_FIELDS, (key) => product[key], tester.currency, formats),
            },
          ],
        ],
      },
      { kind: 'heading', text: 'Formulas' },
      { kind: 'list', items: FORMULAS },
    ],
    foot: '• differs from the default.',
  }
}

const YIELD_WORDS: Readonly<Record<YieldOrigin, string>> = {
  given: 'as given',
  'area and defect density': 'from area and defect density',
  'pass fraction': 'from the measured pass fraction',
  assumed: 'assumed, not measured',
}

const FORMULAS = [
  'Scan: (n + 1) · L shift cycles and the capture cycles of each pattern, a load for each further burst (Bushnell and Agrawal 2000).',
  'Multi-site: one site’s time · (1 + (N − 1) · (1 − E)) a touchdown; per device that and the index time, / N (common practice).',
  'Tested: shipped / Y^T · (1 + retests); hours of use: tested · time per device (common practice).',
  'Escapes: 1 − Y^(1−T) (Williams and Brown 1981), or e / (Y + e) with e = (1−T)(1−Y)e^(−(n0−1)T) (Agrawal, Seth and Agrawal 1982), and the floor.',
  'Stop at the first fail: each step runs while at least one site still passes, with probability 1 − (1 − Y^T)^N.',
]

function fieldTable<Values>(
  fields: readonly AssumptionField<Values>[],
  valueOf: (key: keyof Values & string) => Value | null,
  currency: string,
  formats: NumberFormats,
): Table {
  return {
    columns: [
      { head: '', holds: 'text' },
      { head: '', holds: 'number' },
    ],
    rows: fields.flatMap((field) => {
      const value = valueOf(field.key)
      if (value === null) return LEFT_OUT.has(field.key) ? [] : [[field.label, field.nullMeans]]
      const isChanged = JSON.stringify(value) !== JSON.stringify(field.default)
      const text = withUnit(written(value, formats), field.unit, currency)
      return [[field.label, isChanged ? `${text} •` : text]]
    }),
    marked: null,
  }
}

/** What needs no row where it is not given: where the yield comes from is said above, the others are seldom used. */
const LEFT_OUT = new Set([
  'yield',
  'areaMm2',
  'defectsPerCm2',
  'clustering',
  'passFraction',
  'passCoverage',
  'areaShares',
  'insertions',
])

function withUnit(value: string, unit: string, currency: string): string {
  if (unit.startsWith('money')) return `${currency}${value}${unit.slice('money'.length)}`
  return unit === '' ? value : `${value} ${unit}`
}

function written(value: Value, formats: NumberFormats): string {
  if (typeof value === 'number') return formats.plain(value, 12)
  if (typeof value === 'boolean') return value ? 'yes' : 'no'
  if (typeof value === 'string') return value
  if (!isList(value)) {
    const ranges = Object.entries(value).map(([input, [low, high]]) => {
      return `${input} ${formats.plain(low)} to ${formats.plain(high)}`
    })
    return ranges.join(', ')
  }
  return value
    .map((item) => ('block' in item ? `${item.block} ${formats.plain(item.share)}` : item.name))
    .join(', ')
}

type Value = NonNullable<Tester[keyof Tester] | Product[keyof Product]>
type List = readonly (AreaShare | PlannedInsertion)[]

function isList(value: InputRanges | List): value is List {
  return Array.isArray(value)
}

const BAND_WORDS: Readonly<Record<BandInput, string>> = {
  yield: 'to know the yield',
  n0: 'to know the faults on a defective device',
  model: 'to settle on one model',
}

function bandWords({ plan }: ReportInput, formats: NumberFormats): string {
  const { budget, bandNarrowings } = plan
  const [best] = bandNarrowings
  const range = (low: number, high: number): string =>
    `${formats.dppm(low).value} to ${textOf(formats.dppm(high))}`
  const now = `The escape rate lies between ${range(budget.dppmLow, budget.dppmHigh)} over both models and their inputs.`
  return best === undefined
    ? now
    : `${now} What would narrow it most is ${BAND_WORDS[best.input]}: ${range(best.low, best.high)} would be left.`
}
