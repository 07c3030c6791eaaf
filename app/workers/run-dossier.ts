import { AppError } from '../contract/errors.ts'
import type { Assumptions } from '../contract/shapes/budget.ts'
import { type ChoiceBasis, choiceBasis, orderOfChoice, scanFactsOf } from '../engine/choose/choice-basis.ts'
import { CONSTRAINT_KINDS } from '../engine/choose/constraints.ts'
import { curveOf } from '../engine/choose/coverage-curve.ts'
import { deliveredOrder, handOrder } from '../engine/choose/delivered-order.ts'
import type { Order, OrderName } from '../engine/choose/order.ts'
import { steepestFirst } from '../engine/choose/steepest-first.ts'
import type { Product } from '../engine/quality/product.ts'
import type { DetectionMatrix, DetectionProfile } from '../engine/simulate/detection-profile.ts'
import type { PatternSet } from '../engine/simulate/pattern-set.ts'
import { placeDiagnostics, type PlacedDiagnostic } from '../engine/source/caret-frame.ts'
import type { Source } from '../engine/source/source.ts'
import { buildTimeModel } from '../engine/tester/time-model.ts'
import type { Tester } from '../engine/tester/tester.ts'
import type { LoadedNetlist } from './load-netlist.ts'

/** What of constraints and weights a reader must know although they can be used, a sentence each. */
type KnownBasis = ChoiceBasis & { readonly warnings: readonly string[] }

/** A finished run with all that plans are made from, and what has been worked out of it so far. */
export type RunDossier = LoadedNetlist & {
  readonly patterns: PatternSet
  readonly profile: DetectionProfile
  readonly matrix: DetectionMatrix
  readonly bases: Map<string, KnownBasis>
  readonly orders: Map<string, Order>
  readonly curves: Map<string, Float64Array>
}

/** What an order is chosen by; figures that only price it are not part of it. */
export type ChoiceInput = {
  readonly tester: Tester
  readonly product: Product
  readonly assumptions: Pick<Assumptions, 'constraints' | 'weights' | 'n' | 'byHand'>
  /** The smallest complete set, where one was asked for and found: pattern indices from 0. */
  readonly smallest: Uint32Array | null
}

/** Choices of one run that are kept at hand; a user goes to and fro between a few. */
const KEPT = 8

const held = new Map<string, RunDossier>()
const DOSSIERS_KEPT = 2

export function holdDossier(key: string, dossier: RunDossier): void {
  held.set(key, dossier)
  for (const old of [...held.keys()].slice(0, -DOSSIERS_KEPT)) held.delete(old)
}

/** Throws AppError 'not-found' where the desk does not hold it (any more): whoever asks hands it over again. */
export function heldDossier(key: string): RunDossier {
  const dossier = held.get(key)
  if (dossier === undefined) throw new AppError('not-found', 'the run is not at this desk')
  held.delete(key)
  held.set(key, dossier)
  return dossier
}

/** Throws AppError 'bad-input', with the field in its details, where constraints or weights can't be used. */
export function basisOf(dossier: RunDossier, { tester, product, assumptions }: ChoiceInput): KnownBasis {
  const { faults, matrix, patterns, netlist } = dossier
  const costs = buildTimeModel(tester, product, patterns, scanFactsOf(netlist)).patternCycles
  const key = basisKey(assumptions, costs)
  const before = dossier.bases.get(key)
  if (before !== undefined) return before
  const constraints: Source | null =
    assumptions.constraints === null
      ? null
      : { name: 'constraints', text: linePerKind(assumptions.constraints) }
  const weights: Source | null =
    assumptions.weights === null ? null : { name: 'weights', text: assumptions.weights }
  const { value, diagnostics } = choiceBasis({
    faults,
    matrix,
    costs,
    constraints,
    weights,
    detections: assumptions.n,
  })
  const placed = placeDiagnostics(
    diagnostics,
    [constraints, weights].filter((source) => source !== null),
  )
  if (value === null) {
    const first = placed.find(({ severity }) => severity === 'error')
    const kind = CONSTRAINT_KINDS[(first?.line ?? 0) - 2]
    throw new AppError('bad-input', first === undefined ? undefined : sentenceOf(first), {
      field: first?.file === 'constraints' && kind !== undefined ? `constraints.${kind}` : first?.file,
    })
  }
  const known = { ...value, warnings: placed.map((each) => `Weights: ${sentenceOf(each)}`) }
  remember(dossier.bases, key, known)
  return known
}

/** A text of weights has lines that the user wrote; the one of constraints has not. */
function sentenceOf({ file, line, message, hint }: PlacedDiagnostic): string {
  const what = `${message.charAt(0).toUpperCase()}${message.slice(1)}.`
  const where = file === 'weights' ? `Line ${line}: ${message}.` : what
  return hint === null ? where : `${where} ${hint}${/[.?]$/.test(hint) ? '' : '.'}`
}

/** Returns an order of the run's patterns, worked out once for each choice that it depends on. */
export function orderOf(dossier: RunDossier, name: OrderName, input: ChoiceInput): Order {
  const basis = basisOf(dossier, input)
  const { byHand } = input.assumptions
  const own = name === 'by-hand' ? JSON.stringify(byHand) : name === 'smallest' ? String(input.smallest) : ''
  const key = `${name} ${basisKey(input.assumptions, basis.task.costs)} ${own}`
  const known = dossier.orders.get(key)
  if (known !== undefined) return known
  const order = chooseOrder(basis, name, input)
  remember(dossier.orders, key, order)
  return order
}

/** Returns what each prefix of an order detects: faults or their weight, each once it has been detected so often. */
export function detectedBy(
  dossier: RunDossier,
  basis: ChoiceBasis,
  order: Order,
  detections: number,
): Float64Array {
  const key = `${order.name} ${hashOf(order.sequence)} ${order.runs} ${hashOf(basis.task.weights)} ${detections}`
  const known = dossier.curves.get(key)
  if (known !== undefined) return known
  const { detected } = curveOf({ ...basis.task, detections }, order, basis.total)
  remember(dossier.curves, key, detected)
  return detected
}

function chooseOrder(basis: ChoiceBasis, name: OrderName, { assumptions, smallest }: ChoiceInput): Order {
  const { task } = basis
  switch (name) {
    case 'as-delivered':
      return deliveredOrder(task.rules)
    case 'steepest': {
      const order = steepestFirst(task)
      if (order === null) throw new Error('nobody ended the search')
      return order
    }
    case 'smallest':
      if (smallest === null)
        throw new AppError('bad-input', 'The smallest complete set was not worked out yet.')
      return orderOfChoice(basis, smallest)
    case 'by-hand':
      return handOrder(task.rules, patternsByHand(assumptions.byHand, task.matrix.nPatterns))
  }
}

/** Pattern indices from 0. Throws AppError 'bad-input' where the list names none, one that is not there, or one twice. */
function patternsByHand(byHand: readonly number[] | null, nPatterns: number): Uint32Array {
  const refuse = (message: string): AppError => new AppError('bad-input', message, { field: 'byHand' })
  if (byHand === null) throw refuse('No order was set by hand.')
  const seen = new Set<number>()
  for (const pattern of byHand) {
    if (pattern > nPatterns) throw refuse(`There is no pattern ${pattern}; the set has ${nPatterns}.`)
    if (seen.has(pattern)) throw refuse(`Pattern ${pattern} stands in the order twice.`)
    seen.add(pattern)
  }
  return Uint32Array.from(byHand, (pattern) => pattern - 1)
}

/** Each kind stands on a line of its own, from the second on: so a diagnostic's line tells the kind. */
function linePerKind(constraints: NonNullable<Assumptions['constraints']>): string {
  const lines = CONSTRAINT_KINDS.map((kind) => `"${kind}":${JSON.stringify(constraints[kind])}`)
  return `{\n${lines.join(',\n')}\n}`
}

/** Names what a choice depends on, within one run. */
export function basisKey(
  { constraints, weights, n }: ChoiceInput['assumptions'],
  costs: Float64Array,
): string {
  const even = costs.every((cost) => cost === costs[0])
  return JSON.stringify([constraints, weights, n, even ? 'even' : hashOf(costs)])
}

/** FNV-1a over the bytes of a column, as two numbers of 32 bits so that different columns hardly ever share one. */
function hashOf(column: Uint32Array | Float64Array): string {
  const words = new Uint32Array(column.buffer, column.byteOffset, column.byteLength >> 2)
  let a = 0x811c9dc5
  let b = 0x9747b28c
  for (const word of words) {
    a = Math.imul(a ^ word, 0x01000193)
    b = Math.imul(b ^ (word >>> 7) ^ (word << 25), 0x5bd1e995)
  }
  return `${a >>> 0}.${b >>> 0}.${words.length}`
}

function remember<T>(into: Map<string, T>, key: string, value: T): void {
  into.set(key, value)
  for (const old of [...into.keys()].slice(0, -KEPT)) into.delete(old)
}
