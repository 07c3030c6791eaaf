import type { MoneyView } from '../../../app/contract/shapes/money.ts'
import { type NumberFormats, textOf } from '../../../app/contract/format-number.ts'
import type { SentencePhrase } from '../budget/cut-words.ts'

export type MovedInput = MoneyView['sensitivity'][number]['input']

const plain = (text: string): SentencePhrase => ({ text, strong: false, isCut: false })
const strong = (text: string): SentencePhrase => ({ text, strong: true, isCut: false })

/** Returns the answer: what a year costs at the cut, of what, and how far that is from the least. */
export function moneySentence(view: MoneyView, cut: number, formats: NumberFormats): SentencePhrase[] {
  const at: SentencePhrase = {
    text: `${formats.count(cut).value} pattern${cut === 1 ? '' : 's'}`,
    strong: true,
    isCut: true,
  }
  const money = (sum: number | undefined): string => textOf(formats.money(sum, view.currency))
  const { totalPerYear, testCostPerYear, escapeCostPerYear, leastTotalCut } = view
  if (totalPerYear === null || leastTotalCut === null) {
    const cost = textOf(formats.costPerThousand(view.costPerDevice[cut], view.currency))
    const test = testCostPerYear === null ? '' : `, ${money(testCostPerYear[cut])} a year`
    return [at, plain(' cost '), strong(cost), plain(` of tester time${test}.`)]
  }
  const total = totalPerYear[cut] ?? 0
  const least = totalPerYear[leastTotalCut] ?? 0
  const rest =
    cut === leastTotalCut
      ? 'No other cut of this order costs less.'
      : `The least, ${money(least)}, lies at ${formats.count(leastTotalCut).value}.`
  return [
    at,
    plain(' cost '),
    strong(`${money(total)} a year`),
    plain(`: ${money(testCostPerYear?.[cut])} of tester time and an estimated `),
    strong(money(escapeCostPerYear?.[cut])),
    plain(` of escapes. ${rest}`),
  ]
}

/** Returns what a year's sums lack, in words; empty where they lack nothing. */
export function missingWords({ testCostPerYear, escapeCostPerYear, sensitivity }: MoneyView): string {
  const noVolume = testCostPerYear === null
  // Without a volume no escapes are reckoned either; whether their cost is known shows in what it would move.
  const noEscapeCost = noVolume
    ? sensitivity.every(({ input }) => input !== 'escapeCost')
    : escapeCostPerYear === null
  const missing = [
    ...(noVolume ? ['how many devices are shipped a year'] : []),
    ...(noEscapeCost ? ['what an escape costs'] : []),
  ].join(' and ')
  return missing === '' ? '' : `${missing.charAt(0).toUpperCase()}${missing.slice(1)}`
}

/** Returns the range of an input as people read it: "89.3 to 92.7 %", "€46.4 to €69.6 an hour". */
export function rangeWords(
  input: MovedInput,
  low: number,
  high: number,
  currency: string,
  formats: NumberFormats,
): string {
  switch (input) {
    case 'yield':
      return `${formats.share(low).value} to ${textOf(formats.share(high))}`
    case 'n0':
    case 'sites':
      return `${formats.plain(low, 4)} to ${formats.plain(high, 4)}`
    case 'shiftMHz':
      return `${formats.plain(low, 4)} to ${formats.plain(high, 4)} MHz`
    case 'escapeCost':
    case 'costPerHour': {
      const unit = input === 'costPerHour' ? ' an hour' : ''
      return `${currency}${formats.plain(low, 3)} to ${currency}${formats.plain(high, 3)}${unit}`
    }
  }
}
