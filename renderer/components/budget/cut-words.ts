import type { BudgetView, OrderName, Smallest } from '../../../app/contract/shapes/budget.ts'
import { type NumberFormats, textOf } from '../../../app/contract/format-number.ts'
import type { Phrase } from '../../../app/contract/plan-words.ts'
import type { CutFigures } from './cut-figures.ts'
import type { BrokenLimits } from './cut-limits.ts'

export const ORDER_LABELS: Readonly<Record<OrderName, string>> = {
  steepest: 'Steepest first',
  'as-delivered': 'As delivered',
  smallest: 'Smallest complete set',
  'by-hand': 'By hand',
}

export type SentencePhrase = Phrase & { readonly isCut: boolean }

const plain = (text: string): SentencePhrase => ({ text, strong: false, isCut: false })
const strong = (text: string): SentencePhrase => ({ text, strong: true, isCut: false })

/** Returns the answer: the cut, what it takes, what it detects, what escapes, and what a little more would buy. */
export function cutSentence(
  at: CutFigures,
  next: CutFigures,
  { total, faults, isWeighted }: Pick<BudgetView, 'total' | 'faults' | 'isWeighted'>,
  formats: NumberFormats,
  n: number,
): readonly SentencePhrase[] {
  const more = next.cut - at.cut
  const times = n > 1 ? ` detected ${n} times or more` : ''
  const coverage = isWeighted
    ? [
        strong(textOf(formats.coverage(at.coverage))),
        plain(` by weight${times}, `),
        strong(textOf(formats.coverage(at.plainCoverage))),
        plain(` of ${formats.count(faults).value} faults`),
      ]
    : [
        strong(textOf(formats.coverage(at.coverage))),
        plain(` of ${formats.count(total).value} faults${times}`),
      ]
  return [
    {
      text: `${formats.count(at.cut).value} of ${formats.count(at.patterns).value} patterns`,
      strong: true,
      isCut: true,
    },
    plain(' in '),
    strong(textOf(formats.milliseconds(at.milliseconds))),
    plain(': '),
    ...coverage,
    plain(', an estimated '),
    strong(textOf(formats.dppm(at.dppm))),
    plain(`. ${nextWords(at, next, more, formats)}`),
  ]
}

function nextWords(at: CutFigures, next: CutFigures, more: number, formats: NumberFormats): string {
  if (more === 0) return 'No pattern is left to add.'
  const bought = next.coverage - at.coverage
  const what = bought > 0 ? `buy ${changeWords(bought, formats)}` : 'buy nothing'
  const time = textOf(formats.milliseconds(next.milliseconds - at.milliseconds))
  const which = more === 1 ? 'next pattern' : `next ${more} patterns`
  return `The ${which} would ${what} for ${time}.`
}

/** A share of coverage that is more than nothing, without a sign: "0.053 %". */
function changeWords(share: number, formats: NumberFormats): string {
  const { value, unit } = formats.coverageChange(share)
  return value === '0' ? 'less than 0.001 %' : textOf({ value: value.replace('+', ''), unit })
}

/** Returns which limits a cut breaks and by how much, as one sentence; empty where it breaks none. */
export function brokenWords(broken: BrokenLimits, formats: NumberFormats): string {
  const parts = [
    ...(broken.timeOver > 0
      ? [`over the time limit by ${textOf(formats.milliseconds(broken.timeOver))}`]
      : []),
    ...(broken.memoryOver > 0
      ? [`past the vector memory by ${formats.count(broken.memoryOver).value} cycles`]
      : []),
    ...(broken.coverageShort > 0 ? [`below the goal by ${changeWords(broken.coverageShort, formats)}`] : []),
    ...(broken.dppmOver > 0
      ? [`over the escape rate asked by ${textOf(formats.dppm(broken.dppmOver))}`]
      : []),
  ]
  const text = parts.join('; ')
  return text === '' ? '' : `${text.charAt(0).toUpperCase()}${text.slice(1)}.`
}

/** Returns which of time, memory and goals are kept, in a few words. */
export function keptWords(has: { time: boolean; memory: boolean; goal: boolean }): string {
  const fits = [...(has.time ? ['time'] : []), ...(has.memory ? ['memory'] : [])].join(' and ')
  const parts = [...(fits === '' ? [] : [`fits ${fits}`]), ...(has.goal ? ['meets the goal'] : [])]
  const text = parts.join(', ')
  return text === '' ? 'No limit is set.' : `${text.charAt(0).toUpperCase()}${text.slice(1)}.`
}

/** Returns what the height of the chart counts. */
export function coverageAxisTitle(
  { total, faults, isWeighted }: Pick<BudgetView, 'total' | 'faults' | 'isWeighted'>,
  n: number,
  formats: NumberFormats,
): string {
  const times = n > 1 ? ` detected ${n} times` : ''
  const count = formats.count(isWeighted ? faults : total).value
  return isWeighted
    ? `Weighted coverage${times}, % of the weight of ${count} faults`
    : `Fault coverage${times}, % of ${count} faults`
}

/** Returns what a curve counts: "faults", with how often or by what weight they count. */
export function countedThings({ isWeighted }: Pick<BudgetView, 'isWeighted'>, n: number): string {
  return `${isWeighted ? 'of the weight of faults' : 'faults'}${n > 1 ? ` ${n} times or more` : ''}`
}

/** Returns what is proven of a cut: how much more any choice of as many patterns could detect. */
export function ceilingWords(
  at: CutFigures,
  ceiling: number,
  view: Pick<BudgetView, 'total' | 'isWeighted'>,
  n: number,
  formats: NumberFormats,
): string {
  const { total } = view
  const gap = ceiling - at.detected
  const count = (value: number): string => formats.count(value).value
  const limit = `No choice of ${count(at.cut)} of these patterns can detect more than ${count(ceiling)} ${countedThings(view, n)}; this one detects`
  return gap > 0
    ? `${limit} ${count(at.detected)}, within ${changeWords(gap / total, formats)} of the best.`
    : `${limit} as many: no better choice exists.`
}

/**
 * Returns what is known of the smallest complete set: "best found 52 patterns, at least 50 (not proven)". It is complete
 * in single detections, however many (n) the curves count.
 */
export function smallestWords(
  { patterns, lowerBound, proven }: Smallest,
  n: number,
  formats: NumberFormats,
): string {
  const count = (value: number): string => formats.count(value).value
  const known = proven
    ? `${count(patterns)} patterns, proven the fewest`
    : `best found ${count(patterns)} patterns, at least ${count(lowerBound)} (not proven)`
  return n > 1 ? `${known}, for one detection of each fault` : known
}

/** Returns where the nearest cut lies that keeps the constraints; empty where this one does. */
export function constraintTrouble(mayCut: Uint8Array, cut: number, formats: NumberFormats): string {
  if (mayCut[cut] === 1) return ''
  const after = mayCut.indexOf(1, cut)
  const before = mayCut.lastIndexOf(1, cut)
  const nearest = before < 0 || (after >= 0 && after - cut <= cut - before) ? after : before
  return nearest < 0
    ? 'Against the constraints at every cut of this order.'
    : `Against the constraints, which the cut at ${formats.count(nearest).value} patterns keeps.`
}
