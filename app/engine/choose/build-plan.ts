import { dppmAt } from '../quality/defect-level.ts'
import { bandNarrowings } from '../quality/escape-band.ts'
import { priceInsertions } from '../quality/insertions.ts'
import type { Product } from '../quality/product.ts'
import { type Assumptions, sensitivityOf } from '../quality/sensitivity.ts'
import { type FaultCounts, faultCoverage, testCoverage } from '../quality/test-coverage.ts'
import { chainsByShiftRate, sitesByEfficiency, steppedAround } from '../quality/what-if.ts'
import { resolveYield } from '../quality/yield.ts'
import type { Contradiction } from '../tester/assumption-field.ts'
import { perDeviceMs } from '../tester/multi-site.ts'
import { costOfTime } from '../tester/tester-hours.ts'
import { timeColumns } from '../tester/time-model.ts'
import { chooseCut, type Cut, type Goal, type Limit, meets, type UnmetGoal } from './budget.ts'
import { curveOf } from './coverage-curve.ts'
import { deliveredOrder } from './delivered-order.ts'
import { detectedWeight } from './detected-weight.ts'
import { type Headroom, headroomOf } from './headroom.ts'
import { cutPlaces } from './cut-places.ts'
import { kneeOf } from './knee.ts'
import type { CoverageCurve, Order } from './order.ts'
import type { Marker, MarkerName, MovedOutcome, PlanResult, TimeOutcome } from './plan-result.ts'
import { figuresAt, type PointFigures } from './point-figures.ts'
import { type PlanBasis, planPricing } from './plan-pricing.ts'
import { planProblems } from './plan-problems.ts'
import { type PricedOrder, type Pricing, priceOrder } from './price.ts'
import { sampleBand } from './sample-band.ts'
import { leastTotal, nextMillisecondBuysLess } from './stopping-rules.ts'

/** Everything that a plan is made from. */
export type PlanInput = PlanBasis & {
  /** The weight of all faults of the base, by which coverage is divided. */
  readonly total: number
  readonly order: Order
  readonly limits: readonly Limit[]
  readonly goals: readonly Goal[]
  /** bounds[k − 1]: no k of the patterns detect more. Null where none was worked out. */
  readonly ceiling: Float64Array | null
  /** Returns a bound on what any choice within a budget detects, for patterns that differ in cost; null for none. */
  readonly ceilingWithin: Headroom['ceilingWithin']
  readonly smallest: NonNullable<PlanResult['smallest']> | null
  /** The coverage, 0..1, that a millisecond must buy; a marker stands where none after it does. */
  readonly worthOfMillisecond?: number
}

/** A plan, and the columns behind it for restating every figure at any other cut. */
export type Plan = {
  readonly result: PlanResult
  readonly curve: CoverageCurve
  readonly priced: PricedOrder
  readonly pricing: Pricing
  readonly counts: FaultCounts
}

const WORTH_OF_MILLISECOND = 0.0005
const EFFICIENCIES = [0.8, 0.9, 0.95, 0.98, 1]
const RATE_FACTORS = [0.5, 1, 1.5, 2]

/** A plan, or what in the product does not fit netlist and pattern set, with no plan. */
export type PlanOutcome =
  | { readonly plan: Plan; readonly problems: readonly [] }
  | { readonly plan: null; readonly problems: readonly Contradiction<Product>[] }

/** Prices an order, finds the cut that limits and goals ask for, and works out what hangs on it. */
export function buildPlan(input: PlanInput): PlanOutcome {
  const problems = planProblems(input.product, input.faults, input.patterns)
  return problems.length > 0 ? { plan: null, problems } : { plan: planOf(input), problems: [] }
}

function planOf(input: PlanInput): Plan {
  const { task, order, patterns, tester, product, limits, goals, total } = input
  const worthOfMillisecond = input.worthOfMillisecond ?? WORTH_OF_MILLISECOND
  const { counts, pricing, pricingFor, plainTask, isWeighted, deliveredCoverage, coverageOf } =
    planPricing(input)
  const isPlain = task.detections === 1 && !isWeighted
  const curve = curveOf(task, order, total)
  const plainCurve = isPlain ? curve : curveOf(plainTask, order, counts.all)
  const coverage = coverageOf(order, plainCurve)
  const priced = priceOrder(order.sequence, coverage, pricing)
  const mayCut = cutPlaces(order, task.rules)
  const request = { curve, priced, chosen: order.chosen, mayCut, limits, goals }
  const cut = blameLeftOut(chooseCut(request))
  const atLimits = chooseCut({ ...request, goals: [] })
  const at = (k: number): PointFigures => figuresAt(k, curve, priced, pricing)

  const figures = at(cut.patterns)
  return {
    result: {
      orderName: order.name,
      order: Array.from(order.sequence, (pattern) => pattern + 1),
      curve: Array.from(curve.detected.subarray(1)),
      total,
      ceiling: input.ceiling === null ? [] : Array.from(input.ceiling),
      isWeighted,
      detections: task.detections,
      limits,
      goals,
      budget: {
        ...figures,
        chosen: Array.from(order.sequence.subarray(0, cut.patterns), (pattern) => pattern + 1),
        plainDetected: plainCurve.detected[cut.patterns],
        plainCoverage: faultCoverage(plainCurve.detected[cut.patterns], counts),
      },
      gap:
        input.ceiling === null
          ? null
          : headroomOf(figures, cut, { ceiling: input.ceiling, ceilingWithin: input.ceilingWithin, pricing }),
      ...(input.smallest === null ? {} : { smallest: input.smallest }),
      ...(input.sample === undefined
        ? {}
        : {
            sample: sampleBand(
              input.sample,
              isWeighted ? plainCurve : curve,
              plainCurve,
              cut.patterns,
              counts,
              pricing,
            ),
          }),
      isReached: cut.broken === null && cut.unmet.length === 0,
      cut,
      limitStop: atLimits.stop,
      markers: markersOf(),
      worthOfMillisecond,
      asDelivered: asDelivered(),
      insertions: insertions(),
      yield: resolveYield(product, deliveredCoverage),
      bandNarrowings: bandNarrowings(product, pricing.trueYield, figures.testCoverage),
      sensitivity: sensitivityOf({ tester, product }, pricing.trueYield, movedOutcome),
      whatIf: whatIf(),
    },
    curve,
    priced,
    pricing,
    counts,
  }

  /** Names the patterns that are left out where with them a goal that is not met could be. */
  function blameLeftOut(chosen: Cut): Cut {
    if (order.runs === patterns.nPatterns || chosen.unmet.every(({ stop }) => stop !== null)) return chosen
    const unmet = chosen.unmet.map((one): UnmetGoal => {
      const { model, n0, residualDppm } = product
      const reachable =
        one.goal.kind === 'dppm'
          ? dppmAt(deliveredCoverage, { model, trueYield: pricing.trueYield, n0, residualDppm })
          : detectedWeight(task, order.sequence) / total
      return one.stop === null && meets(one.goal, reachable) ? { ...one, stop: { kind: 'leftOut' } } : one
    })
    return { ...chosen, unmet }
  }

  function markersOf(): readonly Marker[] {
    const places: [MarkerName, number | null][] = [
      ['goal', goals.length > 0 ? cut.patterns : null],
      ['limit', atLimits.stop === null ? null : atLimits.patterns],
      ['knee', kneeOf(curve, priced.milliseconds)],
      [
        'next millisecond',
        nextMillisecondBuysLess(curve, priced.milliseconds, order.chosen, worthOfMillisecond),
      ],
      ['least total', priced.totalPerYear === null ? null : leastTotal(priced.totalPerYear, order.chosen)],
      ['all', order.chosen],
    ]
    return places
      .flatMap(([name, k]): Marker[] => (k === null ? [] : [{ name, figures: at(k) }]))
      .sort((a, b) => a.figures.patterns - b.figures.patterns)
  }

  function asDelivered(): PlanResult['asDelivered'] {
    const delivered = deliveredOrder(task.rules)
    const itsCurve = curveOf(task, delivered, total)
    const itsPlain = isPlain ? itsCurve : curveOf(plainTask, delivered, counts.all)
    const itsPriced = priceOrder(delivered.sequence, coverageOf(delivered, itsPlain), pricing)
    const itsFigures = (k: number): PointFigures => figuresAt(k, itsCurve, itsPriced, pricing)
    const same = itsCurve.detected.findIndex((weight) => weight >= figures.detected)
    const sameLimits = chooseCut({
      curve: itsCurve,
      priced: itsPriced,
      chosen: delivered.chosen,
      mayCut: cutPlaces(delivered, task.rules),
      limits,
      goals: [],
    })
    return {
      curve: Array.from(itsCurve.detected.subarray(1)),
      sameDetected: same < 0 ? null : itsFigures(same),
      sameLimits: itsFigures(sameLimits.patterns),
    }
  }

  function insertions(): PlanResult['insertions'] {
    if (product.insertions === null) return null
    const running = order.sequence.subarray(0, cut.patterns)
    const steps = product.insertions.map((planned) => {
      const isHere = patterns.bursts.map(({ name }) => planned.bursts?.includes(name) ?? true)
      const sequence = running
        .filter((pattern) => isHere[pricing.time.burstOf[pattern]])
        .slice(0, planned.patterns ?? running.length)
      const detected = detectedWeight(plainTask, sequence)
      const own = { ...tester, ...planned.tester }
      const { milliseconds } = timeColumns(pricingFor({ tester: own, product }).time, sequence, false, 0)
      return {
        facts: {
          patterns: sequence.length,
          coverage: faultCoverage(detected, counts),
          testCoverage: testCoverage(detected, counts),
        },
        step: {
          name: planned.name,
          tester: own,
          yieldIn: planned.yieldIn,
          coverage: testCoverage(detected, counts),
          programMs: planned.otherMs + milliseconds[sequence.length],
        },
      }
    })
    const priced = priceInsertions(
      steps.map(({ step }) => step),
      pricing.trueYield,
      product.retestRate,
    )
    return priced.map((step, place) => ({ ...step, ...steps[place].facts }))
  }

  function movedOutcome(moved: Assumptions): MovedOutcome {
    const repriced = priceOrder(order.sequence, coverage, pricingFor(moved))
    const totals = repriced.totalPerYear
    const cheapest = totals === null ? null : leastTotal(totals, order.chosen)
    return {
      patterns: chooseCut({ ...request, priced: repriced }).patterns,
      leastTotalPatterns: cheapest,
      leastTotal: totals === null || cheapest === null ? null : totals[cheapest],
      dppm: repriced.dppm[cut.patterns],
      perDeviceMilliseconds: repriced.perDeviceMilliseconds[cut.patterns],
      costPerDevice: repriced.costPerDevice[cut.patterns],
      totalPerYear: totals === null ? null : totals[cut.patterns],
    }
  }

  function whatIf(): PlanResult['whatIf'] {
    const running = order.sequence.subarray(0, cut.patterns)
    const evaluate = (moved: Assumptions): TimeOutcome => {
      const { time, restMs } = pricingFor(moved)
      const { sites, multiSiteEfficiency, indexMs, costPerHour } = moved.tester
      const { milliseconds } = timeColumns(time, running, false, 0)
      const betweenMs = indexMs + figures.reloads * (moved.tester.reloadMs ?? 0)
      const ms = perDeviceMs(restMs + milliseconds[cut.patterns], sites, multiSiteEfficiency, betweenMs)
      return { perDeviceMilliseconds: ms, costPerDevice: costOfTime(ms, costPerHour) }
    }
    const now = { tester, product }
    const { isScan, chains } = pricing.time
    return {
      chainsByShiftRate: isScan
        ? chainsByShiftRate(
            now,
            input.scan.flipFlops,
            steppedAround(chains),
            RATE_FACTORS.map((factor) => tester.shiftMHz * factor),
            evaluate,
          )
        : null,
      sitesByEfficiency: sitesByEfficiency(
        now,
        steppedAround(tester.sites),
        [...new Set([...EFFICIENCIES, tester.multiSiteEfficiency])].sort((a, b) => a - b),
        evaluate,
      ),
    }
  }
}
