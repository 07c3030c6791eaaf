import type { Field, FieldError, FieldValues } from '../../../app/contract/shapes/model.ts'
import { formats } from '../../formats.ts'

/** From here on an upper end is there against slips, not for people to read. */
const OUT_OF_SIGHT = 1e6

/** Returns what a field allows: "above 0", "from 0 to 1", "1 or more"; empty where that says nothing. */
export function rangeWords({ kind, min, max, openMin }: Field): string {
  if (kind !== 'number' && kind !== 'integer') return ''
  const high = max !== null && max < OUT_OF_SIGHT ? `to ${formats.plain(max)}` : null
  if (min === null) return high === null ? '' : `up ${high}`
  if (openMin) return high === null ? `above ${formats.plain(min)}` : `above ${formats.plain(min)} ${high}`
  return high === null ? `${formats.plain(min)} or more` : `from ${formats.plain(min)} ${high}`
}

/** Returns a field's value as it was typed; null where nothing was. What is no number stays text, and is refused with a reason. */
export function valueOf({ kind }: Field, text: string): number | string | null {
  const trimmed = text.trim().replace(/^[-\u2212]/, '-')
  if (trimmed === '') return null
  const number = Number(trimmed)
  return (kind === 'number' || kind === 'integer') && !Number.isNaN(number) ? number : trimmed
}

/** Returns the sign that stands before a tester's sums of money. */
export function currencyOf(testerFields: readonly Field[], values: FieldValues | undefined): string {
  const standard = testerFields.find(({ key }) => key === 'currency')?.default ?? ''
  return String(values?.['currency'] ?? standard)
}

/** Returns what is wrong with a field, with its label in place of the key that stands in files; null where nothing is. */
export function errorWords({ key, label }: Field, error: FieldError | undefined): string | null {
  return error ? error.message.replaceAll(`"${key}"`, label) : null
}
