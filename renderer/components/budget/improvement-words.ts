import { type NumberFormats, textOf } from '../../../app/contract/format-number.ts'
import { counted } from '../../../app/contract/plan-words.ts'
import type { BudgetView, ImprovedChoice } from '../../../app/contract/shapes/budget.ts'
import type { ImprovementSubject } from '../../stores/improvement.ts'
import { countedThings, ORDER_LABELS } from './cut-words.ts'

/** Returns what a search gained and what is proven of it, a sentence each. */
export function improvementWords(
  found: ImprovedChoice,
  subject: Pick<ImprovementSubject, 'order' | 'cut' | 'within'>,
  view: Pick<BudgetView, 'isWeighted'>,
  n: number,
  formats: NumberFormats,
): readonly string[] {
  const count = (value: number): string => formats.count(value).value
  const things = countedThings(view, n)
  const budget = `${counted(subject.cut, 'pattern', formats)}${subject.within === 'cycles' ? ' and no more tester cycles' : ''}`
  const over = (what: string, before: number): string =>
    found.detected > before ? `${count(found.detected - before)} more than ${what}` : `no more than ${what}`
  const gains = [
    over('choosing the steepest first', found.steepest),
    ...(subject.order === 'steepest'
      ? []
      : [over(`the order shown, ${ORDER_LABELS[subject.order].toLowerCase()}`, found.before)]),
  ]
  const seconds = textOf(formats.duration(found.seconds))
  return [
    `${counted(found.cut, 'pattern', formats)} detect ${count(found.detected)} ${things}: ${gains.join(', and ')}.`,
    found.proven
      ? `Proven in ${seconds}: no choice of ${budget} detects more.`
      : `No choice of ${budget} detects more than ${count(found.bound)}: a gap of ${count(found.bound - found.detected)} is left after ${seconds}.`,
  ]
}
