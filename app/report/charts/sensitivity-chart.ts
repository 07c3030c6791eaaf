import type { NumberFormats } from '../../contract/format-number.ts'
import { INPUT_WORDS } from '../../contract/plan-words.ts'
import type { MovedOutcome } from '../../engine/choose/plan-result.ts'
import type { SensitivityRow } from '../../engine/quality/sensitivity.ts'
import type { Chart } from '../report-document.ts'
import { PALETTE } from './palette.ts'
import { linearScale, ticksOf } from './scale.ts'
import { element, label, line } from './svg.ts'

const WIDTH = 666
const ROW = 23
const LEFT = 176
const RIGHT = WIDTH - 20
const TOP = 8

/** What a row of the chart is drawn from, and how a value of it is written. */
export type SensitivityMeasure = {
  readonly now: number
  readonly of: (outcome: MovedOutcome) => number
  readonly written: (value: number) => string
}

/** Draws how far each input moves one figure: bars from its present value to both ends, the widest first. */
export function sensitivityChart(
  rows: readonly SensitivityRow<MovedOutcome>[],
  measure: SensitivityMeasure,
  formats: NumberFormats,
): Chart {
  const bars = rows
    .map(({ input, low, high }) => ({
      input,
      low: { value: low.value, at: measure.of(low.outcome) },
      high: { value: high.value, at: measure.of(high.outcome) },
    }))
    .sort((a, b) => Math.abs(b.high.at - b.low.at) - Math.abs(a.high.at - a.low.at))
  const ends = bars.flatMap(({ low, high }) => [low.at, high.at])
  const least = Math.min(measure.now, ...ends)
  const most = Math.max(measure.now, ...ends)
  const room = (most - least) * 0.16 || Math.abs(measure.now) * 0.1 || 1
  const x = linearScale(least - room, most + room, LEFT, RIGHT)
  const bottom = TOP + bars.length * ROW
  const middle = x(measure.now)
  const markup = [
    ...ticksOf(x, 5).map((value) => {
      const place = Math.round(x(value)) + 0.5
      return (
        line(place, TOP, place, bottom, { stroke: PALETTE.line }) +
        label(place, bottom + 16, measure.written(value), 'middle')
      )
    }),
    ...bars.map(({ input, low, high }, at) => {
      const y = TOP + at * ROW + 5
      const bar = (to: number, fill: string): string =>
        element('rect', {
          x: Math.min(middle, x(to)),
          y,
          width: Math.abs(x(to) - middle),
          height: ROW - 10,
          fill,
          stroke: PALETTE.series1,
          'stroke-width': 1,
        })
      const endLabel = (end: { value: number; at: number }): string => {
        const isRight = end.at > measure.now || (end.at === measure.now && end === high)
        return label(
          x(end.at) + (isRight ? 5 : -5),
          y + 10,
          inputValue(input, end.value, formats),
          isRight ? 'start' : 'end',
        )
      }
      return [
        label(LEFT - 10, y + 10, INPUT_WORDS[input], 'end', { 'font-size': 12, fill: PALETTE.text }),
        bar(low.at, PALETTE.surface),
        bar(high.at, PALETTE.series1),
        endLabel(low),
        endLabel(high),
      ].join('')
    }),
    line(middle, TOP - 4, middle, bottom + 2, { stroke: PALETTE.cut, 'stroke-width': 2 }),
  ].join('')
  return { width: WIDTH, height: bottom + 22, label: 'How far each assumption moves the figure', markup }
}

function inputValue(input: SensitivityRow<unknown>['input'], value: number, formats: NumberFormats): string {
  if (input === 'yield') return `${formats.share(value).value} %`
  if (input === 'shiftMHz') return `${formats.plain(value, 4)} MHz`
  return formats.plain(value, 4)
}
