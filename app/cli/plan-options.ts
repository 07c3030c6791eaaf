import { PRODUCT_FIELDS } from '../engine/quality/product.ts'
import { TESTER_FIELDS } from '../engine/tester/tester.ts'
import type { Shape } from '../engine/formats/json/read-json.ts'
import type { OptionTable } from './command.ts'
import { NETLIST_DETAILS, NETLIST_OPTIONS } from './netlist-arguments.ts'
import { JSON_OPTION } from './print-json.ts'
import { columns } from './print-text.ts'

export const PLAN_OPTIONS = {
  ...NETLIST_OPTIONS,
  threads: { value: 'N', help: 'threads that simulate; as many as there are processors where not said' },
  tester: { value: 'FILE.json', help: 'rates, memory, sites and price of the tester; keys below' },
  product: { value: 'FILE.json', help: 'yield, scan, set-up, volume and escapes of the product; keys below' },
  program: {
    value: 'FILE.csv',
    help: 'test program list: burst, kind, file, patterns, measured ms, set-up ms, must stay, must be first',
  },
  constraints: {
    value: 'FILE.json',
    help: '{"keep": [3, "10-20"], "leaveOut": [7], "together": [[1, 2]], "before": [[4, 9]], "first": [1]}',
  },
  weights: { value: 'FILE.csv', help: 'what faults are worth: rows of "fault or block,weight"' },
  n: { value: 'N', help: 'a fault counts once N patterns detect it, 1 to 10 (default 1)' },
  order: {
    value: 'ORDER',
    help: 'as-delivered; steepest: most gain per tester cycle first (default); smallest: the fewest patterns that detect all',
  },
  improve: {
    help: 'improve the choice at the cut beyond the order’s prefix: more under a limit, fewer for a goal',
  },
  'smallest-by': {
    value: 'WHAT',
    help: 'what --order smallest makes least: patterns (default), or cycles of the tester',
  },
  'search-seconds': {
    value: 'S',
    help: 'searches for a smallest set and a better choice end with the best so far after S seconds (default 30)',
  },
  sample: {
    value: 'N',
    help: 'choose on N faults drawn at random and quote the coverage from N others; done by itself where the record of all would take over 1 GB',
  },
  accuracy: {
    value: 'A',
    help: 'the same with as many faults as a band of ± A takes at a cut that keeps 90 % of what the set detects, such as 0.005',
  },
  seed: { value: 'N', help: 'begins the random numbers that faults are drawn by (default 1)' },
  'max-patterns': { value: 'N', help: 'at most N patterns; limits are inclusive and may be combined' },
  'max-cycles': { value: 'N', help: 'at most N tester cycles' },
  'max-ms': { value: 'T', help: 'at most T milliseconds on one site, set-up included' },
  'max-device-ms': { value: 'T', help: 'at most T milliseconds a device for the whole program' },
  'min-coverage': { value: 'C', help: 'goal: a coverage of at least C, 0 to 1' },
  'max-dppm': { value: 'D', help: 'goal: at most D escapes in a million shipped devices' },
  faults: {
    value: 'FILE.csv',
    help: 'write every fault, one a row: under the whole set and, in further columns, under the budget',
  },
  report: { value: 'FILE', help: 'write the report: .html, .pdf, .xlsx or .csv' },
  export: { value: 'FILE', help: 'write the chosen patterns in their order: .vec or .txt, .csv, .stil' },
  proof: { value: 'FILE.json', help: 'write what proves the ceiling at the cut: multipliers, columns, rows' },
  ...JSON_OPTION,
} as const satisfies OptionTable

/** What help says of a plan: the cut, the JSON, and every key of tester and product files. */
export function planDetails(): readonly string[] {
  return [
    NETLIST_DETAILS,
    'The cut: under limits the longest prefix of the order that fits; for a goal the shortest prefix that meets it.\n' +
      'A goal that can’t be met ends with exit code 1 and the nearest that can be. The ceiling says what no choice of\n' +
      'so many of these patterns can beat.',
    'JSON: what "coverage" prints, and order, curve (in that order), ceiling, budget, gap, smallest, improvement,\n' +
      'markers, sensitivity, whatIf, asDelivered, insertions, lost, constraintCosts. Patterns are numbered from 1.\n' +
      'From a sample, "sample" holds its size, the faults that the whole set detects (population), and between what curve and\n' +
      'coverage lie; numbers of faults are estimates of the whole list then.',
    `Keys of tester.json, all optional:\n${fieldTable(TESTER_FIELDS)}`,
    `Keys of product.json, all optional:\n${fieldTable(PRODUCT_FIELDS)}`,
  ]
}

type Field = {
  readonly key: string
  readonly unit: string
  readonly shape: Shape
  readonly default: unknown
  readonly nullMeans: string
  readonly explanation: string
}

function fieldTable(fields: readonly Field[]): string {
  return columns(
    fields.map(({ key, unit, shape, default: value, nullMeans, explanation }) => {
      const range = [rangeWords(shape), unit].filter((part) => part !== '').join(' ')
      const otherwise = `default ${value === null ? `null: ${nullMeans}` : JSON.stringify(value)}`
      const rule = range === '' ? otherwise : `${range}; ${otherwise}`
      return [key, `${explanation} ${rule.replace(/^[a-z]/, (letter) => letter.toUpperCase())}.`]
    }),
  )
}

/** Returns what values a shape allows, such as "above 0, at most 1". */
function rangeWords(shape: Shape): string {
  switch (shape.kind) {
    case 'or-null':
      return rangeWords(shape.of)
    case 'number': {
      const parts = [
        shape.above === undefined ? '' : `above ${shape.above}`,
        shape.min === undefined ? '' : `from ${shape.min}`,
        shape.max === undefined ? '' : `up to ${shape.max}`,
        shape.whole === true ? 'whole' : '',
      ]
      return parts.filter((part) => part !== '').join(', ')
    }
    case 'text':
      return (shape.oneOf ?? []).map((word) => `"${word}"`).join(' or ')
    default:
      return ''
  }
}
