import { z } from 'zod'
import { float64Column } from './columns.ts'

const known = z.number().nullable()
const count = z.number().int().nonnegative()

/** What becomes of the cut when one input moves, and where the least total and the goal's cut go. */
const movedShape = z.object({
  /** The input's value, in the unit of files. */
  value: z.number(),
  dppm: z.number(),
  perDeviceMilliseconds: z.number(),
  costPerDevice: z.number(),
  totalPerYear: known,
  leastTotalCut: count.nullable(),
  leastTotal: known,
  /** The cut that limits and goals ask for; null where none is set. */
  wantedCut: count.nullable(),
})

const timeGridShape = z.object({
  rows: z.array(z.number()),
  columns: z.array(z.number()),
  /** The row's and the column's value as they are; the column's may not be among those of the grid. */
  now: z.object({ row: z.number(), column: z.number() }),
  /** One list for each row. */
  outcomes: z.array(z.array(z.object({ perDeviceMilliseconds: z.number(), costPerDevice: z.number() }))),
})

/** What a cut costs, how firm that is, and what other equipment would change. Sums are a year's, in the tester's currency. */
export const moneyViewShape = z.object({
  cut: count,
  patterns: count,
  /** How many patterns at the front of the order were chosen for a gain. */
  chosen: count,
  currency: z.string(),
  /** Length patterns + 1, index = patterns applied; null where the product does not say enough. */
  testCostPerYear: float64Column.nullable(),
  escapeCostPerYear: float64Column.nullable(),
  totalPerYear: float64Column.nullable(),
  costPerDevice: float64Column,
  leastTotalCut: count.nullable(),
  wantedCut: count.nullable(),
  at: z.object({
    perDeviceMilliseconds: z.number(),
    /** The mean where the program stops once all sites have failed. */
    meanPerDeviceMilliseconds: z.number(),
    dppm: z.number(),
    dppmLow: z.number(),
    dppmHigh: z.number(),
    testedPerYear: known,
    hoursPerYear: known,
    capacityHoursPerYear: known,
  }),
  modelNote: z.string(),
  /** The band that is left once one input is known, narrowest first. */
  narrowings: z.array(
    z.object({ input: z.enum(['yield', 'n0', 'model']), low: z.number(), high: z.number() }),
  ),
  sensitivity: z.array(
    z.object({
      input: z.enum(['yield', 'n0', 'escapeCost', 'costPerHour', 'sites', 'shiftMHz']),
      low: movedShape,
      high: movedShape,
    }),
  ),
  chainsByShiftRate: timeGridShape.nullable(),
  sitesByEfficiency: timeGridShape,
  insertions: z
    .array(
      z.object({
        name: z.string(),
        patterns: count,
        testCoverage: z.number(),
        yieldIn: z.number(),
        passFraction: z.number(),
        perDeviceMilliseconds: z.number(),
        testedPerShipped: z.number(),
        costPerShipped: z.number(),
      }),
    )
    .nullable(),
})

export type MoneyView = z.infer<typeof moneyViewShape>
