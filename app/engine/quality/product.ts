import type { Shape } from '../formats/json/read-json.ts'
import type { Reading } from '../source/diagnostic.ts'
import type { Source } from '../source/source.ts'
import {
  type AssumptionField,
  type Contradiction,
  defaultsOf,
  readAssumptions,
  shapesOf,
} from '../tester/assumption-field.ts'
import { type Tester, TESTER_FIELDS } from '../tester/tester.ts'

export const DEFECT_MODELS = ['williams-brown', 'agrawal-seth-agrawal'] as const
export type DefectModel = (typeof DEFECT_MODELS)[number]

/** A block of the hierarchy, by the prefix of its names, and its share of the chip's area. */
export type AreaShare = { readonly block: string; readonly share: number }

/** The inputs whose uncertainty moves a plan. */
export const RANGE_INPUTS = ['yield', 'n0', 'escapeCost', 'costPerHour', 'sites', 'shiftMHz'] as const
export type RangeInput = (typeof RANGE_INPUTS)[number]

/** Lowest and highest value to be reckoned with, for inputs about which more is known than ± 20 %. */
export type InputRanges = { readonly [Input in RangeInput]?: readonly number[] }

/** One step of test, as a product plans it: which bursts run there, on what. */
export type PlannedInsertion = {
  readonly name: string
  /** Names of the bursts that run here. Null: all. */
  readonly bursts: readonly string[] | null
  /** At most so many of their patterns, in the order. Null: all that the budget holds. */
  readonly patterns: number | null
  /** The yield of what comes in. Null: the product's at the first, then what the step before lets through. */
  readonly yieldIn: number | null
  /** The rest of its program on one site. */
  readonly otherMs: number
  /** What its tester has different from the plan's. */
  readonly tester: Partial<Tester>
}

/** A product: what it yields, how it is scanned, how many are shipped, what an escape costs. Null is explained at each field. */
export type Product = {
  readonly name: string
  readonly yield: number | null
  readonly areaMm2: number | null
  readonly defectsPerCm2: number | null
  readonly clustering: number | null
  readonly passFraction: number | null
  readonly passCoverage: number | null
  readonly areaShares: readonly AreaShare[] | null
  readonly model: DefectModel
  readonly n0: number
  readonly residualDppm: number
  readonly ranges: InputRanges | null
  readonly chains: number | null
  readonly longestChain: number | null
  readonly captureCycles: number
  readonly chainTest: boolean
  readonly setupMs: number
  readonly otherMs: number
  readonly otherCycles: number
  readonly timeCorrection: number
  readonly guardBand: number
  readonly shippedPerYear: number | null
  readonly retestRate: number
  readonly escapeCost: number | null
  readonly insertions: readonly PlannedInsertion[] | null
}

/** The yield where a product file says nothing of it: an assumption, no measurement. */
export const ASSUMED_YIELD = 0.9

const YIELD = { kind: 'number', above: 0, max: 1 } as const
const AMOUNT = { kind: 'number', min: 0, max: 1e15 } as const
const COUNT = { kind: 'number', min: 1, max: 1e9, whole: true } as const
const N0 = { kind: 'number', min: 1, max: 1e6 } as const

function rangeOf(of: Shape): Shape {
  return { kind: 'list', of, minItems: 2, maxItems: 2 }
}

/** Every key of a product file, in the order in which forms and reports show them. */
export const PRODUCT_FIELDS: readonly AssumptionField<Product>[] = [
  {
    key: 'name',
    label: 'Name',
    unit: '',
    shape: { kind: 'text' },
    default: 'Product',
    nullMeans: '',
    explanation: 'How the product is called in lists and reports.',
  },
  {
    key: 'yield',
    label: 'Yield',
    unit: '',
    shape: { kind: 'or-null', of: YIELD },
    default: null,
    nullMeans: `worked out from area and defect density, or from the pass fraction; ${ASSUMED_YIELD} where none is given`,
    explanation: 'The share of devices without a defect in what the patterns test, before any test.',
  },
  {
    key: 'areaMm2',
    label: 'Area',
    unit: 'mm²',
    shape: { kind: 'or-null', of: { kind: 'number', above: 0, max: 1e6 } },
    default: null,
    nullMeans: 'not given',
    explanation: 'Area of what the patterns test; with the defect density it gives the yield.',
  },
  {
    key: 'defectsPerCm2',
    label: 'Defect density',
    unit: 'per cm²',
    shape: { kind: 'or-null', of: { kind: 'number', min: 0, max: 1e6 } },
    default: null,
    nullMeans: 'not given',
    explanation: 'Killing defects per square centimetre; with the area it gives the yield.',
  },
  {
    key: 'clustering',
    label: 'Clustering',
    unit: '',
    shape: { kind: 'or-null', of: { kind: 'number', above: 0, max: 1e6 } },
    default: null,
    nullMeans: 'defects fall independently (Poisson)',
    explanation: 'The α of the negative binomial yield: the smaller, the more defects cluster.',
  },
  {
    key: 'passFraction',
    label: 'Pass fraction, measured',
    unit: '',
    shape: { kind: 'or-null', of: YIELD },
    default: null,
    nullMeans: 'not measured',
    explanation: 'The share of devices that pass today, instead of a yield.',
  },
  {
    key: 'passCoverage',
    label: 'Coverage at that measurement',
    unit: '',
    shape: { kind: 'or-null', of: { kind: 'number', above: 0, max: 1 } },
    default: null,
    nullMeans: 'the coverage of the whole pattern set as delivered',
    explanation: 'The test coverage of the patterns under which the pass fraction was measured.',
  },
  {
    key: 'areaShares',
    label: 'Area by block',
    unit: '',
    shape: {
      kind: 'or-null',
      of: {
        kind: 'list',
        minItems: 1,
        of: {
          kind: 'object',
          keys: { block: { kind: 'text' }, share: { kind: 'number', min: 0, max: 1 } },
          required: ['block', 'share'],
        },
      },
    },
    default: null,
    nullMeans: 'defects spread as faults do',
    explanation: 'Blocks by the prefix of their names, each with its share of the area; shares add up to 1.',
  },
  {
    key: 'model',
    label: 'Defect-level model',
    unit: '',
    shape: { kind: 'text', oneOf: DEFECT_MODELS },
    default: 'williams-brown',
    nullMeans: '',
    explanation: 'Which model names the escape rate; both are shown as a band.',
  },
  {
    key: 'n0',
    label: 'Faults on a defective device',
    unit: '',
    shape: N0,
    default: 2,
    nullMeans: '',
    explanation: 'The mean number n0, 1 or more, in the model of Agrawal, Seth and Agrawal.',
  },
  {
    key: 'residualDppm',
    label: 'Floor',
    unit: 'DPPM',
    shape: { kind: 'number', min: 0, max: 1e6 },
    default: 1,
    nullMeans: '',
    explanation: 'Escapes from defects that the fault model does not know; added to the model’s figure.',
  },
  {
    key: 'ranges',
    label: 'Ranges of inputs',
    unit: '',
    shape: {
      kind: 'or-null',
      of: {
        kind: 'object',
        keys: {
          yield: rangeOf(YIELD),
          n0: rangeOf(N0),
          escapeCost: rangeOf(AMOUNT),
          costPerHour: rangeOf(AMOUNT),
          sites: rangeOf(COUNT),
          shiftMHz: rangeOf({ kind: 'number', above: 0, max: 100_000 }),
        },
      },
    },
    default: null,
    nullMeans: '± 20 % each, for the yield 20 % more and fewer defects',
    explanation:
      'Lowest and highest yield, n0, escapeCost, costPerHour, sites or shiftMHz to be reckoned with, for the band and the sensitivity.',
  },
  {
    key: 'chains',
    label: 'Scan chains',
    unit: '',
    shape: { kind: 'or-null', of: COUNT },
    default: null,
    nullMeans: 'as traced in the netlist, else 1',
    explanation: 'Chains that the tester loads at the same time.',
  },
  {
    key: 'longestChain',
    label: 'Longest chain',
    unit: 'bits',
    shape: { kind: 'or-null', of: COUNT },
    default: null,
    nullMeans: 'as traced, else flip-flops divided by chains, rounded up',
    explanation: 'Bits of the longest chain, which sets the length of a load.',
  },
  {
    key: 'captureCycles',
    label: 'Capture cycles',
    unit: 'a pattern',
    shape: { kind: 'number', min: 0, max: 1e6, whole: true },
    default: 1,
    nullMeans: '',
    explanation: 'Cycles between load and unload of each scan pattern.',
  },
  {
    key: 'chainTest',
    label: 'Chain test',
    unit: '',
    shape: { kind: 'boolean' },
    default: false,
    nullMeans: '',
    explanation: 'Whether a chain test of longest chain + 4 shift cycles runs before the patterns.',
  },
  {
    key: 'setupMs',
    label: 'Set-up',
    unit: 'ms a burst',
    shape: AMOUNT,
    default: 0,
    nullMeans: '',
    explanation: 'Time before each burst: levels, timing, initialisation.',
  },
  {
    key: 'otherMs',
    label: 'Rest of the program',
    unit: 'ms',
    shape: AMOUNT,
    default: 0,
    nullMeans: '',
    explanation: 'What the program takes on one site without these patterns.',
  },
  {
    key: 'otherCycles',
    label: 'Memory of the rest',
    unit: 'cycles per pin',
    shape: { kind: 'number', min: 0, max: 1e15, whole: true },
    default: 0,
    nullMeans: '',
    explanation: 'Vector memory that the rest of the program holds; a repeated block counts once.',
  },
  {
    key: 'timeCorrection',
    label: 'Measured ÷ computed',
    unit: '',
    shape: { kind: 'number', above: 0, max: 1000 },
    default: 1,
    nullMeans: '',
    explanation: 'Multiplies computed times, where a burst’s time was measured.',
  },
  {
    key: 'guardBand',
    label: 'Guard band',
    unit: '',
    shape: { kind: 'number', min: 0, max: 10 },
    default: 0.05,
    nullMeans: '',
    explanation: 'Share of time to keep in hand; shown beside every time, not added to it.',
  },
  {
    key: 'shippedPerYear',
    label: 'Devices shipped',
    unit: 'a year',
    shape: { kind: 'or-null', of: { kind: 'number', above: 0, max: 1e12 } },
    default: null,
    nullMeans: 'not known: nothing is worked out for a year',
    explanation: 'Good devices that leave the house in a year.',
  },
  {
    key: 'retestRate',
    label: 'Retests',
    unit: '',
    shape: { kind: 'number', min: 0, max: 10 },
    default: 0,
    nullMeans: '',
    explanation: 'Retests as a share of first tests.',
  },
  {
    key: 'escapeCost',
    label: 'Cost of an escape',
    unit: 'money',
    shape: { kind: 'or-null', of: AMOUNT },
    default: null,
    nullMeans: 'not known: the cost of escapes is not worked out',
    explanation: 'What one defective device costs once it is shipped.',
  },
  {
    key: 'insertions',
    label: 'Insertions',
    unit: '',
    shape: {
      kind: 'or-null',
      of: {
        kind: 'list',
        minItems: 1,
        of: {
          kind: 'object',
          keys: {
            name: { kind: 'text' },
            bursts: { kind: 'or-null', of: { kind: 'list', of: { kind: 'text' } } },
            patterns: { kind: 'or-null', of: COUNT },
            yieldIn: { kind: 'or-null', of: YIELD },
            otherMs: AMOUNT,
            tester: { kind: 'object', keys: shapesOf(TESTER_FIELDS) },
          },
          required: ['name'],
        },
      },
    },
    default: null,
    nullMeans: 'the patterns run once, on the tester of the plan',
    explanation:
      'Steps of test such as wafer sort and final test, each with its bursts, yield in and tester.',
  },
]

export const DEFAULT_PRODUCT: Product = defaultsOf(PRODUCT_FIELDS)

/** How far area shares may be from adding up to 1, for shares written with few digits. */
const SHARE_TOLERANCE = 1e-3

/** Reads a product file. Codes: those of readAssumptions. */
export function readProduct(source: Source): Reading<Product> {
  const { value, diagnostics } = readAssumptions(
    source,
    'product file',
    PRODUCT_FIELDS,
    productContradictions,
  )
  if (value === null || value.insertions === null) return { value, diagnostics }
  const unsaid = { bursts: null, patterns: null, yieldIn: null, otherMs: 0, tester: {} }
  return {
    value: { ...value, insertions: value.insertions.map((insertion) => ({ ...unsaid, ...insertion })) },
    diagnostics,
  }
}

/** Returns what does not fit together in a product, key by key; empty where all does. */
export function productContradictions(product: Product): readonly Contradiction<Product>[] {
  const found: Contradiction<Product>[] = []
  const yieldKeys = (['yield', 'areaMm2', 'passFraction'] as const).filter((key) => product[key] !== null)
  if (yieldKeys.length > 1) {
    found.push({
      key: yieldKeys[1],
      message: `"${yieldKeys[0]}" and "${yieldKeys[1]}" both say what the yield is`,
      hint: 'Keep one of them; set the other to null',
    })
  }
  if ((product.areaMm2 === null) !== (product.defectsPerCm2 === null)) {
    const [given, missing] = product.areaMm2 === null ? AREA_KEYS : [AREA_KEYS[1], AREA_KEYS[0]]
    found.push({
      key: given,
      message: `"${given}" is given, "${missing}" is not; a yield needs both`,
      hint: `Add "${missing}", or give "yield" instead`,
    })
  }
  if (product.passCoverage !== null && product.passFraction === null) {
    found.push({
      key: 'passCoverage',
      message: '"passCoverage" is given, "passFraction" is not',
      hint: 'Add the pass fraction that was measured at this coverage, or remove it',
    })
  }
  for (const [input, range] of Object.entries(product.ranges ?? {})) {
    if (range[0] > range[1]) {
      found.push({
        key: 'ranges',
        message: `the range of "${input}" runs from ${range[0]} down to ${range[1]}`,
        hint: 'Write the lower value first',
      })
    }
  }
  if (product.areaShares !== null) found.push(...shareContradictions(product.areaShares))
  return found
}

const AREA_KEYS = ['defectsPerCm2', 'areaMm2'] as const

function shareContradictions(shares: readonly AreaShare[]): readonly Contradiction<Product>[] {
  const sum = shares.reduce((total, { share }) => total + share, 0)
  if (Math.abs(sum - 1) > SHARE_TOLERANCE) {
    return [
      {
        key: 'areaShares',
        message: `the shares of "areaShares" add up to ${Number(sum.toPrecision(6))}; 1 is expected`,
        hint: 'Name what is left as a block of its own, or scale the shares',
      },
    ]
  }
  const names = shares.map(({ block }) => block)
  const twice = names.find((name, at) => names.indexOf(name) !== at)
  if (twice === undefined) return []
  return [{ key: 'areaShares', message: `block "${twice}" is listed twice`, hint: 'Join its shares' }]
}
