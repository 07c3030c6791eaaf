import { z } from 'zod'
import { bytesColumn, float64Column, uint32Column } from './columns.ts'
import { atMsShape, idShape, nameShape, noteShape } from './ids.ts'
import { fieldValuesShape, limitsShape } from './model.ts'

const count = z.number().int().nonnegative()

export const orderNameShape = z.enum(['as-delivered', 'steepest', 'smallest', 'by-hand'])

/** A pattern's number from 1, or a range such as "10-20". */
const patternsShape = z.union([z.number().int().positive(), z.string()])
const patternListShape = z.array(patternsShape)

export const constraintsShape = z.object({
  keep: patternListShape.default([]),
  leaveOut: patternListShape.default([]),
  together: z.array(patternListShape).default([]),
  /** Pairs; a range stands for each of its patterns. */
  before: z.array(z.tuple([patternsShape, patternsShape])).default([]),
  first: patternListShape.default([]),
})

/** What a budget's figures stand on. A product's or tester's own values apply where `productValues`, `testerValues` are empty. */
export const assumptionsShape = z.object({
  testerId: idShape.nullable(),
  testerValues: fieldValuesShape.default({}),
  productValues: fieldValuesShape.default({}),
  limits: limitsShape,
  constraints: constraintsShape.nullable().default(null),
  /** Weights file's text (fault or block,weight); null: every fault counts once. */
  weights: z.string().nullable().default(null),
  /** Detections a fault needs, 1 to 10. */
  n: z.number().int().min(1).max(10).default(1),
  /** The order by hand: pattern numbers from 1. */
  byHand: z.array(z.number().int().positive()).nullable().default(null),
})

/**
 * Everything the Budget screen shows of one order, at every cut: columns of length patterns + 1, index = patterns applied.
 */
export const orderColumnsShape = z.object({
  order: orderNameShape,
  patterns: count,
  /** How many patterns at the front were chosen for a gain. */
  chosen: count,
  /** 1 where a cut respects every constraint: kept patterns run, groups are whole, nothing that is left out. */
  mayCut: bytesColumn,
  /** Length patterns: the pattern number, from 1, at each position. */
  pattern: uint32Column,
  /** Length patterns: faults that this pattern alone detects in the whole set. */
  detectsAlone: uint32Column,
  /** Faults detected, or their weight. */
  detected: float64Column,
  /** Faults detected n or more times; equal to `detected` where n is 1. */
  detectedN: float64Column,
  /** Faults detected, each counted once whatever it weighs. */
  detectedPlain: float64Column,
  cycles: float64Column,
  milliseconds: float64Column,
  perDeviceMilliseconds: float64Column,
  vectorMemory: float64Column,
  reloads: float64Column,
  dppm: float64Column,
  dppmLow: float64Column,
  dppmHigh: float64Column,
  costPerDevice: float64Column,
  /** Cost of test and of escapes a year; NaN where the product has no volume. */
  testCostPerYear: float64Column,
  escapeCostPerYear: float64Column,
  testerHoursPerYear: float64Column,
})

export const markerShape = z.object({
  kind: z.enum(['knee', 'least-cost', 'goal', 'time-limit', 'memory-full', 'marginal']),
  /** Patterns applied. */
  cut: count,
  label: z.string(),
})

/** The fewest patterns found that detect all that the whole set does; no set has fewer than the bound. */
export const smallestShape = z.object({ patterns: count, lowerBound: count, proven: z.boolean() })

export const constraintKindShape = z.enum(['keep', 'leaveOut', 'together', 'before', 'first'])

/** What each kind of constraint costs a choice of as many tester cycles as a cut takes. */
export const constraintCostsShape = z.object({
  /** What the best choice found detects with all of them. */
  detected: z.number().nonnegative(),
  rows: z.array(
    z.object({
      kind: constraintKindShape,
      /** What a choice without this kind detects more; 0 where it costs nothing. */
      cost: z.number().nonnegative(),
      /** True where no choice fits the cut with this kind, and one does without it. */
      isInTheWay: z.boolean(),
    }),
  ),
})

/** A choice that takes no more than a cut does. */
export const improvedChoiceShape = z.object({
  /** Pattern numbers from 1: the choice, steepest first, then what else detects something. */
  order: z.array(z.number().int().positive()),
  /** How many of them are the choice. */
  cut: count,
  detected: z.number().nonnegative(),
  /** What the first patterns of the order detect that it was asked for. */
  before: z.number().nonnegative(),
  /** What choosing the steepest first detects within as much. */
  steepest: z.number().nonnegative(),
  /** No choice within as much detects more. */
  bound: z.number().nonnegative(),
  proven: z.boolean(),
  seconds: z.number().nonnegative(),
})

export const budgetViewShape = z.object({
  runId: idShape,
  /** The weight of all faults of the base, by which coverage is divided. */
  total: z.number().nonnegative(),
  faults: count,
  /** True where weights make the faults count differently: `detected` is a weight then, and so is `total`. */
  isWeighted: z.boolean(),
  /** What is known of the smallest complete set, where it is among the orders. */
  smallest: smallestShape.nullable(),
  base: z.enum(['lines', 'cell pins']),
  untestable: count,
  byChainTest: count,
  possibly: count,
  currency: z.string(),
  limits: limitsShape,
  /** Vector memory of the tester, in cycles per pin; null where it has no limit. */
  vectorMemory: z.number().nullable(),
  reloadAllowed: z.boolean(),
  orders: z.array(orderColumnsShape),
  markers: z.array(z.object({ order: orderNameShape, marks: z.array(markerShape) })),
  /** What the models assume, in words: "Williams and Brown 1981, yield 94.0 %". */
  modelNote: z.string(),
  /** Anything that a reader of the figures must know, such as patterns that count for time alone. */
  cautions: z.array(z.string()),
})

export const ceilingShape = z.object({
  /** Index = number of patterns; no choice of that many detects more. Length patterns + 1. */
  ceiling: float64Column,
  /** Seconds it took and how it was proven, in words. */
  note: z.string(),
})

export const budgetShape = z.object({
  id: idShape,
  productId: idShape,
  runId: idShape,
  name: nameShape,
  note: noteShape,
  createdAtMs: atMsShape,
  inUse: z.boolean(),
  order: orderNameShape,
  cut: count,
  assumptions: assumptionsShape,
  /** The figures as they were when it was kept. */
  figures: z.object({
    patterns: count,
    detected: z.number(),
    coverage: z.number(),
    cycles: z.number(),
    milliseconds: z.number(),
    perDeviceMilliseconds: z.number(),
    vectorMemory: z.number(),
    dppm: z.number(),
    costPerDevice: z.number(),
  }),
  /** True where the run was redone or deleted since. */
  stale: z.boolean(),
})

export type OrderName = z.infer<typeof orderNameShape>
export type Constraints = z.infer<typeof constraintsShape>
export type Assumptions = z.infer<typeof assumptionsShape>
export type OrderColumns = z.infer<typeof orderColumnsShape>
export type Marker = z.infer<typeof markerShape>
export type BudgetView = z.infer<typeof budgetViewShape>
export type Ceiling = z.infer<typeof ceilingShape>
export type Budget = z.infer<typeof budgetShape>
export type Smallest = z.infer<typeof smallestShape>
export type ConstraintKind = z.infer<typeof constraintKindShape>
export type ConstraintCosts = z.infer<typeof constraintCostsShape>
export type ImprovedChoice = z.infer<typeof improvedChoiceShape>
