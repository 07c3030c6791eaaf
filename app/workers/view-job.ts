import type { Budget, BudgetView, Marker, OrderColumns, OrderName } from '../contract/shapes/budget.ts'
import { chooseCut, type Goal, type Limit } from '../engine/choose/budget.ts'
import type { ChoiceBasis } from '../engine/choose/choice-basis.ts'
import type { ChoiceRules } from '../engine/choose/choice-rules.ts'
import { cutPlaces } from '../engine/choose/cut-places.ts'
import { kneeOf } from '../engine/choose/knee.ts'
import type { CoverageCurve, Order } from '../engine/choose/order.ts'
import { type PlanPricing, planPricing } from '../engine/choose/plan-pricing.ts'
import { type PricedOrder, type Pricing, priceOrder } from '../engine/choose/price.ts'
import { leastTotal, nextMillisecondBuysLess } from '../engine/choose/stopping-rules.ts'
import { DeskAnswer } from './desk-answer.ts'
import { modelNote } from './model-note.ts'
import type { CutOfPlan, PlanJobs, PlanRequest } from './plan-jobs.ts'
import { planBasisOf } from './plan-of-run.ts'
import { basisOf, detectedBy, heldDossier, orderOf, type RunDossier } from './run-dossier.ts'
import { runFigures } from './run-figures.ts'

type PricedView = {
  readonly order: Order
  readonly curve: CoverageCurve
  readonly detectedOnce: Float64Array
  readonly plain: Float64Array
  readonly priced: PricedOrder
}

/** So many warnings of weights are shown; more of the same help nobody. */
const MOST_WARNINGS = 3

/** The coverage that a millisecond must buy, for the mark where it no longer does. */
const WORTH_OF_MILLISECOND = 0.0005

/** Works out every figure of the asked orders at every cut. */
export function viewJob({
  orders,
  ...request
}: PlanJobs['view']['input']): DeskAnswer<PlanJobs['view']['output']> {
  const dossier = heldDossier(request.key)
  const basis = basisOf(dossier, request)
  const pricing = planPricing(planBasisOf(dossier, request))
  const { tester } = pricing.pricing
  const views = orders.map((name) => ({ name, ...priceView(dossier, basis, name, request, pricing) }))
  const columns = views.map((view) => columnsOf(view, dossier, basis.task.rules))
  const figures = runFigures(dossier.faults, dossier.profile)
  const output: Omit<BudgetView, 'runId' | 'smallest'> = {
    total: basis.total,
    faults: figures.faults,
    isWeighted: pricing.isWeighted,
    base: dossier.faults.base,
    untestable: pricing.counts.untestable,
    byChainTest: figures.byChainTest,
    possibly: figures.possibly,
    currency: tester.currency,
    limits: request.assumptions.limits,
    vectorMemory: tester.vectorMemory,
    reloadAllowed: tester.reloadMs !== null,
    orders: columns,
    markers: views.map((view) => ({
      order: view.name,
      marks: marksOf(view, basis, request, pricing.pricing),
    })),
    modelNote: modelNote(pricing),
    cautions: [...cautionsOf(dossier), ...basis.warnings.slice(0, MOST_WARNINGS)],
  }
  return new DeskAnswer(output, columns.flatMap(buffersOf))
}

/** Works out the figures of one cut. */
export function figuresJob({ order: name, cut, ...request }: CutOfPlan): DeskAnswer<Budget['figures']> {
  const dossier = heldDossier(request.key)
  const basis = basisOf(dossier, request)
  const pricing = planPricing(planBasisOf(dossier, request))
  const { curve, priced } = priceView(dossier, basis, name, request, pricing)
  const k = Math.min(cut, dossier.patterns.nPatterns)
  const at = (column: Float64Array): number => column[k] ?? 0
  return new DeskAnswer({
    patterns: k,
    detected: at(curve.detected),
    coverage: curve.total > 0 ? at(curve.detected) / curve.total : 0,
    cycles: at(priced.cycles),
    milliseconds: at(priced.milliseconds),
    perDeviceMilliseconds: at(priced.perDeviceMilliseconds),
    vectorMemory: at(priced.vectorMemory),
    dppm: at(priced.dppm),
    costPerDevice: at(priced.costPerDevice),
  })
}

function priceView(
  dossier: RunDossier,
  basis: ChoiceBasis,
  name: OrderName,
  request: PlanRequest,
  pricing: PlanPricing,
): PricedView {
  const { task, total } = basis
  const order = orderOf(dossier, name, request)
  const curve = { detected: detectedBy(dossier, basis, order, task.detections), total }
  const detectedOnce = detectedBy(dossier, basis, order, 1)
  const { plainTask, counts } = pricing
  const plainBasis = { ...basis, task: plainTask, total: counts.all }
  const plain = pricing.isWeighted ? detectedBy(dossier, plainBasis, order, 1) : detectedOnce
  const coverage = pricing.coverageOf(order, { detected: plain, total: counts.all })
  return { order, curve, detectedOnce, plain, priced: priceOrder(order.sequence, coverage, pricing.pricing) }
}

function columnsOf(
  { order, curve, detectedOnce, plain, priced }: PricedView,
  dossier: RunDossier,
  rules: ChoiceRules,
): OrderColumns {
  const nPatterns = order.sequence.length
  const unknown = (): Float64Array => new Float64Array(nPatterns + 1).fill(NaN)
  const alone = detectedAlone(dossier)
  return {
    order: order.name,
    patterns: nPatterns,
    chosen: order.chosen,
    mayCut: cutPlaces(order, rules),
    pattern: order.sequence.map((pattern) => pattern + 1),
    detectsAlone: order.sequence.map((pattern) => alone[pattern] ?? 0),
    detected: detectedOnce.slice(),
    detectedN: curve.detected.slice(),
    detectedPlain: plain.slice(),
    cycles: priced.cycles,
    milliseconds: priced.milliseconds,
    perDeviceMilliseconds: priced.perDeviceMilliseconds,
    vectorMemory: priced.vectorMemory,
    reloads: priced.reloads,
    dppm: priced.dppm,
    dppmLow: priced.dppmLow,
    dppmHigh: priced.dppmHigh,
    costPerDevice: priced.costPerDevice,
    testCostPerYear: priced.testCostPerYear ?? unknown(),
    escapeCostPerYear: priced.escapeCostPerYear ?? unknown(),
    testerHoursPerYear: priced.hoursPerYear ?? unknown(),
  }
}

/** Returns for each pattern how many faults no other pattern of the set detects. */
function detectedAlone({ faults, profile }: RunDossier): Uint32Array {
  const alone = new Uint32Array(profile.nPatterns)
  for (let group = 0; group < profile.nClasses; group++) {
    const first = profile.first[group] ?? -1
    if (profile.detections[group] === 1 && first >= 0) {
      alone[first] = (alone[first] ?? 0) + (faults.classSize[group] ?? 0)
    }
  }
  return alone
}

function marksOf(
  { order, curve, priced }: PricedView,
  { task }: ChoiceBasis,
  { assumptions }: PlanRequest,
  { tester }: Pricing,
): Marker[] {
  const { maxMilliseconds, minCoverage, maxDppm } = assumptions.limits
  const marks: Marker[] = []
  const mark = (kind: Marker['kind'], cut: number | null, label: string): void => {
    if (cut !== null) marks.push({ kind, cut, label })
  }
  const goals: Goal[] = []
  if (minCoverage !== null) goals.push({ kind: 'coverage', least: minCoverage })
  if (maxDppm !== null) goals.push({ kind: 'dppm', most: maxDppm })
  const limits: Limit[] = maxMilliseconds === null ? [] : [{ kind: 'milliseconds', most: maxMilliseconds }]
  const request = { curve, priced, chosen: order.chosen, mayCut: cutPlaces(order, task.rules) }

  mark('knee', kneeOf(curve, priced.milliseconds), 'Knee of the curve')
  if (priced.totalPerYear !== null) {
    mark('least-cost', leastTotal(priced.totalPerYear, order.chosen), 'Least total cost')
  }
  if (goals.length > 0) {
    const cut = chooseCut({ ...request, limits: [], goals })
    mark('goal', cut.unmet.length === 0 ? cut.patterns : null, 'To the goal only')
  }
  if (limits.length > 0) {
    const cut = chooseCut({ ...request, limits, goals: [] })
    mark('time-limit', cut.stop !== null && cut.broken === null ? cut.patterns : null, 'To the time limit')
  }
  if (tester.vectorMemory !== null) {
    const over = priced.reloads.findIndex((times) => times > 0)
    mark('memory-full', over > 0 ? over - 1 : null, 'Vector memory full')
  }
  mark(
    'marginal',
    nextMillisecondBuysLess(curve, priced.milliseconds, order.chosen, WORTH_OF_MILLISECOND),
    'Where time stops paying',
  )
  return marks.sort((a, b) => a.cut - b.cut)
}

function cautionsOf({ patterns, netlist, faults }: RunDossier): string[] {
  const cautions: string[] = []
  const timeOnly = patterns.timeOnly?.reduce((sum, flag) => sum + flag, 0) ?? 0
  if (timeOnly > 0) {
    cautions.push(
      `${timeOnly} ${timeOnly === 1 ? 'pattern counts' : 'patterns count'} for time alone: their coverage is not known, so it is not claimed.`,
    )
  }
  for (const { kind, count } of netlist.report.unusable) {
    cautions.push(`${count} × ${kind}: taken as unknown, which can only lower the coverage shown.`)
  }
  if (faults.base === 'cell pins') {
    cautions.push('Faults are counted on cell pins; coverage on lines of another netlist is not comparable.')
  }
  return cautions
}

function buffersOf(columns: OrderColumns): ArrayBuffer[] {
  const buffers = Object.values(columns).flatMap((column) =>
    ArrayBuffer.isView(column) ? [column.buffer as ArrayBuffer] : [],
  )
  return [...new Set(buffers)]
}
