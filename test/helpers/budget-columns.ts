import type { BudgetView, OrderColumns, OrderName } from '../../app/contract/shapes/budget.ts'

const CYCLES_A_PATTERN = 550
const YIELD = 0.94

/**
 * Returns made-up columns of an order: coverage climbs as 1 − e^(−k / reach), every pattern takes the same time, escapes
 * follow Williams and Brown 1981 with a yield of 94 %.
 */
export function orderColumns(
  order: OrderName,
  patterns: number,
  reach: number,
  total = 40_000,
): OrderColumns {
  const column = (of: (k: number) => number): Float64Array =>
    Float64Array.from({ length: patterns + 1 }, (_, k) => of(k))
  const detected = column((k) => Math.round(0.991 * total * (1 - Math.exp(-k / reach))))
  const cycles = column((k) => (k === 0 ? 0 : (k + 1) * CYCLES_A_PATTERN))
  const ms = cycles.map((each) => 0.1 + each / 50_000)
  const dppm = detected.map((each) => 1e6 * (1 - YIELD ** (1 - each / total)))
  return {
    order,
    patterns,
    chosen: patterns,
    mayCut: new Uint8Array(patterns + 1).fill(1),
    pattern: Uint32Array.from({ length: patterns }, (_, at) =>
      order === 'as-delivered' ? at + 1 : patterns - at,
    ),
    detectsAlone: new Uint32Array(patterns).map((_, at) => (at % 7 === 0 ? 1 : 0)),
    detected,
    detectedN: detected.map((each) => Math.round(each * 0.9)),
    detectedPlain: detected,
    cycles,
    milliseconds: ms,
    perDeviceMilliseconds: ms.map((each) => (each + 20) / 4),
    vectorMemory: cycles,
    reloads: new Float64Array(patterns + 1),
    dppm,
    dppmLow: dppm.map((each) => each / 2),
    dppmHigh: dppm.map((each) => each * 3),
    costPerDevice: ms.map((each) => each * 1e-5),
    testCostPerYear: ms.map((each) => each * 1000),
    escapeCostPerYear: dppm.map((each) => each * 10),
    testerHoursPerYear: ms.map((each) => each * 3),
  }
}

/** Returns a view of two orders with limits inside the set: half of its time, 98 % coverage. */
export function budgetView(patterns: number, changes: Partial<BudgetView> = {}): BudgetView {
  const steepest = orderColumns('steepest', patterns, patterns / 12)
  return {
    runId: 1,
    total: 40_000,
    faults: 40_000,
    isWeighted: false,
    smallest: null,
    base: 'lines',
    untestable: 200,
    byChainTest: 0,
    possibly: 0,
    currency: '€',
    limits: {
      maxMilliseconds: steepest.milliseconds[patterns / 2] ?? 1,
      minCoverage: 0.98,
      maxDppm: 1250,
    },
    vectorMemory: (steepest.cycles[patterns] ?? 0) * 0.6,
    reloadAllowed: false,
    orders: [orderColumns('as-delivered', patterns, patterns / 5), steepest],
    markers: [
      {
        order: 'steepest',
        marks: [{ kind: 'knee', cut: Math.round(patterns / 4), label: 'Knee of the curve' }],
      },
    ],
    modelNote: 'Williams and Brown 1981, yield 94.0 %',
    cautions: [],
    ...changes,
  }
}
