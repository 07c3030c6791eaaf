import type { LostBlock } from '../../engine/choose/lost-blocks.ts'
import type { NumberFormats } from '../../contract/format-number.ts'
import { counted } from '../../contract/plan-words.ts'
import type { ReportPage, Table } from '../report-document.ts'
import type { ReportInput } from '../report-input.ts'

const MOST_ROWS = 30

/** What the cut gives up, by block, and the account of all faults. Null where neither was worked out. */
export function lostPage({ plan, lost, states, counts }: ReportInput, formats: NumberFormats): ReportPage {
  const count = (value: number): string => formats.count(value).value
  const sorted = [...(lost ?? [])].sort((a, b) => b.lost - a.lost)
  const total = sorted.reduce((sum, block) => sum + block.lost, 0)
  const words =
    lost === null
      ? `What is lost by block was not worked out${plan.sample === undefined ? '' : ': the plan is made from a sample of the faults'}.`
      : total === 0
        ? 'The cut loses nothing: it detects all that the whole pattern set detects.'
        : `The cut loses ${counted(total, 'fault', formats)} that the whole pattern set detects, in ${count(sorted.filter((block) => block.lost > 0).length)} of ${counted(sorted.length, 'block', formats)}.`
  const left = sorted.length - MOST_ROWS
  return {
    blocks: [
      { kind: 'title', text: 'What the cut loses' },
      { kind: 'text', text: words },
      ...(sorted.length === 0
        ? []
        : [{ kind: 'table', table: lostTable(sorted.slice(0, MOST_ROWS), formats) } as const]),
      ...(left > 0
        ? [
            {
              kind: 'text',
              text: `${count(left)} more blocks, each losing fewer, are in the XLSX report.`,
            } as const,
          ]
        : []),
      { kind: 'heading', text: 'All faults under the whole pattern set' },
      {
        kind: 'table',
        table: {
          columns: [
            { head: 'State', holds: 'text' },
            { head: 'Faults, uncollapsed', holds: 'number' },
            { head: 'Share, %', holds: 'number' },
          ],
          rows: states.map(({ state, faults }) => [
            state.charAt(0).toUpperCase() + state.slice(1),
            count(faults),
            formats.coverage(counts.all > 0 ? faults / counts.all : 0).value,
          ]),
          marked: null,
        },
      },
    ],
    foot: `Budget of ${count(plan.budget.patterns)} patterns; the whole set has ${count(plan.order.length)}.`,
  }
}

function lostTable(blocks: readonly LostBlock[], formats: NumberFormats): Table {
  const count = (value: number): string => formats.count(value).value
  return {
    columns: [
      { head: 'Block', holds: 'text' },
      { head: 'Faults', holds: 'number' },
      { head: 'Coverage,\u00a0%', holds: 'number' },
      { head: 'Lost', holds: 'number' },
      { head: 'Brought back most cheaply by', holds: 'number' },
    ],
    rows: blocks.map(({ block, faults, detected, lost, cheapest }) => [
      block === '' ? 'top of the hierarchy' : block,
      count(faults),
      formats.coverage(faults > 0 ? detected / faults : null).value,
      count(lost),
      cheapest === null
        ? '–'
        : `pattern ${count(cheapest.pattern)}: ${count(cheapest.faults)} in ${counted(cheapest.cycles, 'cycle', formats)}`,
    ]),
    marked: null,
  }
}
