import type { NumberFormats } from '../../contract/format-number.ts'
import { counted } from '../../contract/plan-words.ts'
import type { ReportPage } from '../report-document.ts'
import type { ReportInput } from '../report-input.ts'

const MOST_ROWS = 1000

/** The patterns that run, in their order, with what each adds. */
export function patternsPage({ plan, curve, priced }: ReportInput, formats: NumberFormats): ReportPage {
  const { budget } = plan
  const shown = Math.min(budget.patterns, MOST_ROWS)
  const rows = Array.from({ length: shown }, (_, place) => {
    const k = place + 1
    const detected = curve.detected[k] ?? 0
    return [
      formats.count(k).value,
      formats.count(plan.order[place]).value,
      formats.count(detected - (curve.detected[place] ?? 0)).value,
      formats.coverageInTable(curve.total > 0 ? detected / curve.total : 0),
      formats.count((priced.cycles[k] ?? 0) - (priced.cycles[place] ?? 0)).value,
      formats.milliseconds(priced.milliseconds[k]).value,
      formats.dppm(priced.dppm[k]).value,
    ]
  })
  const rest =
    shown < budget.patterns
      ? ` The first ${formats.count(shown).value} of them; all are in the CSV report.`
      : ''
  return {
    blocks: [
      { kind: 'title', text: 'Patterns in order' },
      {
        kind: 'text',
        text: `The ${counted(budget.patterns, 'pattern', formats)} of the budget, numbered as in the file.${rest}`,
      },
      {
        kind: 'table',
        table: {
          columns: ['Place', 'Pattern', 'Gain', 'Coverage,\u00a0%', 'Cycles', 'ms so far', 'DPPM'].map(
            (head) => ({ head, holds: 'number' }) as const,
          ),
          rows,
          marked: null,
        },
      },
    ],
    foot: 'Gain: faults that no pattern before it detects.',
  }
}
