import type { OrderName } from '../../../app/contract/shapes/budget.ts'
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
  total: number,
  formats: NumberFormats,
  n: number,
): readonly SentencePhrase[] {
  const more = next.cut - at.cut
  const times = n > 1 ? ` detected ${n} times or more` : ''
  return [
    {
      text: `${formats.count(at.cut).value} of ${formats.count(at.patterns).value} patterns`,
      strong: true,
      isCut: true,
    },
    plain(' in '),
    strong(textOf(formats.milliseconds(at.milliseconds))),
    plain(': '),
    strong(textOf(formats.coverage(at.coverage))),
    plain(` of ${formats.count(total).value} faults${times}, an estimated `),
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

/** Returns what is proven of a cut: how much more any choice of as many patterns could detect. */
export function ceilingWords(at: CutFigures, ceiling: number, total: number, formats: NumberFormats): string {
  const gap = ceiling - at.detected
  const count = (value: number): string => formats.count(value).value
  const limit = `No choice of ${count(at.cut)} of these patterns can detect more than ${count(ceiling)} faults; this one detects`
  return gap > 0
    ? `${limit} ${count(at.detected)}, within ${changeWords(gap / total, formats)} of the best.`
    : `${limit} as many: no better choice exists.`
}
