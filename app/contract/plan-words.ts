import type { Goal, Limit, Stop, UnmetGoal } from '../engine/choose/budget.ts'
import type { OrderName } from '../engine/choose/order.ts'
import type { MarkerName, PlanResult } from '../engine/choose/plan-result.ts'
import type { RangeInput } from '../engine/quality/product.ts'
import { type NumberFormats, textOf } from './format-number.ts'

/** A piece of a sentence; the strong ones carry the figures. */
export type Phrase = { readonly text: string; readonly strong: boolean }

export const ORDER_WORDS: Readonly<Record<OrderName, string>> = {
  'as-delivered': 'as delivered',
  steepest: 'the steepest first',
  smallest: 'the smallest complete set',
  'by-hand': 'in an order set by hand',
}

export const INPUT_WORDS: Readonly<Record<RangeInput, string>> = {
  yield: 'Yield',
  n0: 'Faults on a defective device',
  escapeCost: 'Cost of an escape',
  costPerHour: 'Tester rate',
  sites: 'Sites',
  shiftMHz: 'Shift rate',
}

export const MARKER_WORDS: Readonly<Record<MarkerName, string>> = {
  goal: 'To the goal only',
  limit: 'To the limit',
  knee: 'Knee of the curve',
  'next millisecond': 'Where time stops paying',
  'least total': 'Least total cost',
  all: 'All that detect something',
}

/** Returns why the answer of a plan is no, one sentence each; empty where it is yes. */
export function shortfallsOf({ cut }: PlanResult, formats: NumberFormats): readonly string[] {
  const broken = cut.broken === null ? [] : [brokenWords(cut.broken, cut.patterns, formats)]
  return [...broken, ...cut.unmet.map((unmet) => unmetWords(unmet, formats))]
}

/** Returns a count with its noun, such as "1 pattern" or "1,024 patterns". */
export function counted(count: number, noun: string, formats: NumberFormats): string {
  return `${formats.count(count).value} ${noun}${count === 1 ? '' : 's'}`
}

/** Returns a limit's figure with its unit, such as "9.50 ms". */
export function limitWords(limit: Limit, formats: NumberFormats): string {
  switch (limit.kind) {
    case 'patterns':
      return counted(limit.most, 'pattern', formats)
    case 'cycles':
      return counted(limit.most, 'tester cycle', formats)
    case 'milliseconds':
      return textOf(formats.milliseconds(limit.most))
    case 'deviceMilliseconds':
      return `${textOf(formats.milliseconds(limit.most))} a device`
  }
}

export function stopWords(stop: Stop, formats: NumberFormats): string {
  if (stop.kind === 'vectorMemory') return 'the vector memory'
  if (stop.kind === 'leftOut') return 'what the constraints leave out'
  return `the limit of ${limitWords(stop, formats)}`
}

/** Returns a goal in words, such as "a coverage of 98.00 %". */
export function goalWords(goal: Goal, formats: NumberFormats): string {
  return goal.kind === 'coverage'
    ? `a coverage of ${textOf(formats.coverage(goal.least))}`
    : `at most ${textOf(formats.dppm(goal.most))}`
}

/** Returns why a goal is not met and the nearest that can be. */
function unmetWords({ goal, nearest, stop }: UnmetGoal, formats: NumberFormats): string {
  const near = goal.kind === 'coverage' ? textOf(formats.coverage(nearest)) : textOf(formats.dppm(nearest))
  const cause =
    stop === null ? 'these patterns detect no more' : `${stopWords(stop, formats)} stands in the way`
  return `The goal of ${goalWords(goal, formats)} can't be reached: ${cause}. The nearest is ${near}.`
}

/** Returns why a cut breaks a limit although it is the shortest that the constraints allow. */
function brokenWords(broken: Stop, patterns: number, formats: NumberFormats): string {
  const kept =
    patterns === 1 ? 'the one pattern that is' : `the ${formats.count(patterns).value} patterns that are`
  return `The constraints and ${stopWords(broken, formats)} don't go together: ${kept} kept do not fit.`
}

/** Returns what a plan's curve counts. */
export function countedWords({ isWeighted, detections }: PlanResult): string {
  const what = isWeighted ? 'of the weight of faults' : 'faults'
  return detections === 1 ? what : `${what}, each ${detections} times or more`
}

/** Returns what a plan's coverage is of. */
export function coverageWords({ isWeighted, detections }: PlanResult): string {
  const what = isWeighted ? 'Weighted coverage' : 'Coverage'
  return detections === 1 ? what : `${what} by ${detections} patterns or more`
}

/** Returns the answer of a plan: what to run, what it takes, what it detects, what escapes. */
export function answerPhrases(plan: PlanResult, formats: NumberFormats): readonly Phrase[] {
  const { budget } = plan
  const plain = (text: string): Phrase => ({ text, strong: false })
  const strong = (text: string): Phrase => ({ text, strong: true })
  const all = plan.order.length
  const limit = plan.limits.find(({ kind }) => kind === 'milliseconds')
  const isInside = limit !== undefined && budget.milliseconds <= limit.most
  return [
    plain('Run '),
    strong(`${formats.count(budget.patterns).value} of ${formats.count(all).value} patterns`),
    plain(`, ${ORDER_WORDS[plan.orderName]}. They take `),
    strong(textOf(formats.milliseconds(budget.milliseconds))),
    plain(' on one site'),
    plain(limit === undefined ? '' : `, ${isInside ? 'inside' : 'over'} ${stopWords(limit, formats)}`),
    plain(', and detect '),
    strong(textOf(formats.coverage(budget.plainCoverage))),
    plain(' of all stuck-at faults. An estimated '),
    strong(`${formats.dppm(budget.dppm).value} of a million`),
    plain(' shipped devices would be defective.'),
  ]
}
