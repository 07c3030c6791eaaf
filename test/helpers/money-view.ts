import type { MoneyView } from '../../app/contract/shapes/money.ts'

/** A product of our own invention with four patterns: test costs rise by 10 a pattern, escapes halve with each. */
export function moneyView(change: Partial<MoneyView> = {}): MoneyView {
  const moved = (value: number, totalPerYear: number): MoneyView['sensitivity'][number]['low'] => ({
    value,
    dppm: 100,
    perDeviceMilliseconds: 2,
    costPerDevice: 0.001,
    totalPerYear,
    leastTotalCut: 2,
    leastTotal: 120,
    wantedCut: null,
  })
  const grid = {
    rows: [1, 2],
    columns: [0.9, 1],
    now: { row: 1, column: 0.9 },
    outcomes: [
      [
        { perDeviceMilliseconds: 2, costPerDevice: 0.001 },
        { perDeviceMilliseconds: 2, costPerDevice: 0.001 },
      ],
      [
        { perDeviceMilliseconds: 1.1, costPerDevice: 0.00055 },
        { perDeviceMilliseconds: 1, costPerDevice: 0.0005 },
      ],
    ],
  }
  return {
    cut: 2,
    patterns: 4,
    chosen: 3,
    currency: '€',
    testCostPerYear: Float64Array.of(0, 10, 20, 30, 40),
    escapeCostPerYear: Float64Array.of(400, 200, 100, 95, 95),
    totalPerYear: Float64Array.of(400, 210, 120, 125, 135),
    costPerDevice: Float64Array.of(0, 0.0005, 0.001, 0.0015, 0.002),
    leastTotalCut: 2,
    wantedCut: null,
    at: {
      perDeviceMilliseconds: 2,
      meanPerDeviceMilliseconds: 1.9,
      dppm: 100,
      dppmLow: 50,
      dppmHigh: 300,
      testedPerYear: 1000,
      hoursPerYear: 1,
      capacityHoursPerYear: 1.2,
    },
    modelNote: 'Williams and Brown 1981, yield 94.0 %',
    narrowings: [{ input: 'model', low: 80, high: 150 }],
    sensitivity: [
      { input: 'costPerHour', low: moved(80, 116), high: moved(120, 124) },
      { input: 'escapeCost', low: moved(8, 100), high: moved(12, 140) },
    ],
    chainsByShiftRate: null,
    sitesByEfficiency: grid,
    insertions: null,
    ...change,
  }
}
