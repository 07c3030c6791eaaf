import type { OrderColumns } from '../../app/contract/shapes/budget.ts'
import { type NumberFormats, textOf } from '../../app/contract/format-number.ts'
import { tickDigits } from './nice-ticks.ts'

export const AXES = ['patterns', 'cycles', 'milliseconds', 'cost'] as const

/** What effort is counted in along the chart. */
export type AxisName = (typeof AXES)[number]

export const AXIS_LABELS: Readonly<Record<AxisName, string>> = {
  patterns: 'Patterns',
  cycles: 'Tester cycles',
  milliseconds: 'Time per device',
  cost: 'Cost per device',
}

const counted = new Map<number, Float64Array>()

/** Returns where each number of patterns of an order stands along an axis; cost is for a thousand devices. */
export function axisColumn(columns: OrderColumns, axis: AxisName): Float64Array {
  switch (axis) {
    case 'patterns':
      return countedTo(columns.patterns)
    case 'cycles':
      return columns.cycles
    case 'milliseconds':
      return columns.perDeviceMilliseconds
    case 'cost':
      return thousandfold(columns.costPerDevice)
  }
}

export function axisTitle(axis: AxisName, currency: string): string {
  switch (axis) {
    case 'patterns':
      return 'patterns applied'
    case 'cycles':
      return 'tester cycles'
    case 'milliseconds':
      return 'time per device, ms'
    case 'cost':
      return `cost per 1,000 devices, ${currency}`
  }
}

/** Returns the tick labels of an axis with no more digits than tell them apart. */
export function axisTickLabels(axis: AxisName, ticks: readonly number[], locale: string): string[] {
  const digits = axis === 'patterns' || axis === 'cycles' ? 0 : tickDigits(ticks)
  const format = new Intl.NumberFormat(locale, {
    minimumFractionDigits: digits,
    maximumFractionDigits: digits,
  })
  return ticks.map((tick) => format.format(tick))
}

/** Returns what the cut's handle says, in the axis's unit. */
export function axisValue(axis: AxisName, value: number, currency: string, formats: NumberFormats): string {
  switch (axis) {
    case 'patterns':
    case 'cycles':
      return formats.count(value).value
    case 'milliseconds':
      return textOf(formats.milliseconds(value))
    case 'cost':
      return formats.costPerThousand(value / 1000, currency).value
  }
}

function countedTo(patterns: number): Float64Array {
  const known = counted.get(patterns)
  if (known) return known
  const column = Float64Array.from({ length: patterns + 1 }, (_, index) => index)
  counted.clear()
  counted.set(patterns, column)
  return column
}

const thousands = new WeakMap<Float64Array, Float64Array>()

function thousandfold(column: Float64Array): Float64Array {
  const known = thousands.get(column) ?? column.map((value) => value * 1000)
  thousands.set(column, known)
  return known
}
