import type { Figure, NumberFormats } from '../../../app/contract/format-number.ts'
import type { BudgetView } from '../../../app/contract/shapes/budget.ts'
import type { CutFigures } from './cut-figures.ts'

export type FigureRow = {
  readonly label: string
  readonly figure: Figure
  /** Where it has a limit: what is used of it, 0..1.25, and in words the limit and what is left of it. */
  readonly meter: {
    readonly used: number
    readonly isOver: boolean
    readonly limit: string
    readonly left: string
  } | null
  /** A line below it; empty where there is nothing to say. */
  readonly note: string
}

/** Returns what is said of a cut beside the chart, limits first. */
export function figureRows(
  view: BudgetView,
  at: CutFigures,
  n: number,
  formats: NumberFormats,
): readonly FigureRow[] {
  const { currency, vectorMemory, limits } = view
  const ms = (value: number): string => formats.milliseconds(value).value
  const count = (value: number): string => formats.count(value).value
  const dppm = (value: number): string => formats.dppm(value).value
  const plain = (label: string, figure: Figure, note = ''): FigureRow => ({
    label,
    figure,
    meter: null,
    note,
  })
  const band = `${dppm(at.dppmLow)} to ${dppm(at.dppmHigh)} over models and inputs`
  return [
    {
      ...plain('Time on one site', formats.milliseconds(at.milliseconds)),
      meter: meter(at.milliseconds, limits.maxMilliseconds, (most, rest) => ({
        limit: `limit ${ms(most)} ms`,
        left: rest < 0 ? `${ms(-rest)} over` : `${ms(rest)} left`,
      })),
    },
    {
      ...plain(
        'Vector memory',
        vectorMemory === null
          ? formats.count(at.vectorMemory)
          : formats.share(at.vectorMemory / vectorMemory),
        vectorMemory === null ? 'cycles; the tester states no limit' : '',
      ),
      meter: meter(at.vectorMemory, vectorMemory, (most, rest) => ({
        limit: `${count(at.vectorMemory)} of ${count(most)} cycles`,
        left:
          rest >= 0
            ? ''
            : view.reloadAllowed
              ? `${count(at.reloads)} reloads a touchdown`
              : 'reload forbidden',
      })),
    },
    {
      ...plain('Escape rate, estimated', formats.dppm(at.dppm), band),
      meter: meter(at.dppm, limits.maxDppm, (most, rest) => ({
        limit: `at most ${dppm(most)}`,
        left: rest < 0 ? `${dppm(-rest)} over` : `${dppm(rest)} below`,
      })),
    },
    plain(view.isWeighted ? 'Weighted coverage' : 'Fault coverage', formats.coverage(at.coverage)),
    ...(view.isWeighted ? [plain('Plain coverage', formats.coverage(at.plainCoverage))] : []),
    ...(n > 1 ? [plain('Detected at least once', formats.coverage(at.detectedOnce / view.total))] : []),
    ...(view.untestable > 0 ? [plain('Test coverage', formats.coverage(at.testCoverage))] : []),
    plain('Time per device', formats.milliseconds(at.perDeviceMilliseconds)),
    plain('Cost per 1,000 devices', {
      value: formats.costPerThousand(at.costPerDevice, currency).value,
      unit: '',
    }),
    plain('Tester hours a year', formats.hours(at.testerHoursPerYear)),
    plain('Test and escapes a year', formats.money(at.costPerYear, currency)),
  ]
}

function meter(
  value: number,
  most: number | null,
  words: (most: number, rest: number) => { limit: string; left: string },
): FigureRow['meter'] {
  if (most === null) return null
  const rest = most - value
  return { used: Math.min(value / most, 1.25), isOver: rest < 0, ...words(most, rest) }
}
