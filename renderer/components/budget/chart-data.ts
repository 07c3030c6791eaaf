import type { BudgetView } from '../../../app/contract/shapes/budget.ts'
import { detectedColumn } from './cut-figures.ts'

/** Returns the data behind the chart as CSV (RFC 4180): one row for each number of patterns, plain numbers. */
export function chartCsv(view: BudgetView, ceiling: Float64Array | null, n: number): string {
  const { orders, total, faults, isWeighted } = view
  const head = [
    'patterns',
    ...orders.flatMap(({ order }) => [
      `${order} pattern`,
      `${order} detected`,
      `${order} coverage`,
      ...(isWeighted ? [`${order} plain coverage`] : []),
      `${order} cycles`,
      `${order} ms on one site`,
      `${order} ms per device`,
      `${order} dppm`,
      `${order} cost per device`,
    ]),
    ...(ceiling ? ['ceiling'] : []),
  ]
  const rows = [head.join(',')]
  const patterns = orders[0]?.patterns ?? 0
  for (let k = 0; k <= patterns; k++) {
    const cells: (string | number)[] = [k]
    for (const columns of orders) {
      const detected = detectedColumn(columns, n)[k] ?? NaN
      cells.push(
        k === 0 ? '' : (columns.pattern[k - 1] ?? ''),
        detected,
        detected / total,
        ...(isWeighted ? [(columns.detectedPlain[k] ?? NaN) / faults] : []),
        columns.cycles[k] ?? '',
        columns.milliseconds[k] ?? '',
        columns.perDeviceMilliseconds[k] ?? '',
        columns.dppm[k] ?? '',
        columns.costPerDevice[k] ?? '',
      )
    }
    if (ceiling) cells.push(ceiling[k] ?? '')
    rows.push(cells.join(','))
  }
  return `${rows.join('\r\n')}\r\n`
}
