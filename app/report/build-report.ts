import { numberFormats, textOf } from '../contract/format-number.ts'
import { counted } from '../contract/plan-words.ts'
import { DEFAULT_PRODUCT } from '../engine/quality/product.ts'
import { answerPage } from './pages/answer-page.ts'
import { assumptionsPage } from './pages/assumptions-page.ts'
import { lostPage } from './pages/lost-page.ts'
import { moneyPage } from './pages/money-page.ts'
import { patternsPage } from './pages/patterns-page.ts'
import { reproducePage } from './pages/reproduce-page.ts'
import type { ReportDocument, ReportPage } from './report-document.ts'
import type { ReportInput } from './report-input.ts'

const formats = numberFormats('en')

/** Lays a plan out as the pages of a report; page 1 always stands, the others as asked. */
export function buildReport(input: ReportInput): ReportDocument {
  const { sections } = input
  const title = input.title ?? ownTitle(input)
  const pages: ReportPage[] = [answerPage(input, title, formats)]
  if (sections.assumptions) pages.push(assumptionsPage(input, formats))
  if (sections.money) pages.push(moneyPage(input, formats))
  if (sections.lost) pages.push(lostPage(input, formats))
  if (sections.reproduce) pages.push(reproducePage(input, formats))
  if (sections.patterns) pages.push(patternsPage(input, formats))
  return {
    title,
    heads: [
      input.company ?? 'Test budget',
      `${productName(input)}, ${input.subject}`,
      dayInWords(input.date),
    ],
    author: input.author,
    paper: input.paper,
    pages,
  }
}

/** The product's name, or the circuit's where the product has none of its own. */
function productName({ pricing, circuit }: ReportInput): string {
  return pricing.product.name === DEFAULT_PRODUCT.name ? circuit.name : pricing.product.name
}

function ownTitle(input: ReportInput): string {
  const { plan } = input
  if (!plan.isReached) return `${productName(input)}: these patterns can’t do what is asked`
  const { patterns, milliseconds } = plan.budget
  if (patterns === 0) return `${productName(input)}: no pattern runs`
  return `${productName(input)} can be tested with ${counted(patterns, 'pattern', formats)} in ${textOf(formats.milliseconds(milliseconds))}`
}

const MONTHS = [
  'January',
  'February',
  'March',
  'April',
  'May',
  'June',
  'July',
  'August',
  'September',
  'October',
  'November',
  'December',
]

/** Returns 2026-12-01 as "1 December 2026". */
function dayInWords(date: string): string {
  const [year, month, day] = date.split('-').map(Number)
  return `${day} ${MONTHS[(month ?? 1) - 1]} ${year}`
}
