/** A number as people read it, apart from its unit, which may be set smaller. The unit is empty where there is none. */
export type Figure = {
  readonly value: string
  readonly unit: string
}

/** What stands for a figure that is not known. */
export const NOT_KNOWN: Figure = { value: '–', unit: '' }

const NO_BREAK_SPACE = '\u00a0'

/** Returns value and unit in one text that does not break between them. */
export function textOf({ value, unit }: Figure): string {
  return unit === '' ? value : `${value}${NO_BREAK_SPACE}${unit}`
}

/**
 * How each quantity is shown. Every function takes the figure in the unit of files (fractions, milliseconds, currency)
 * and gives an en dash for null and for what is no finite number. A value never rounds to what would be a promise:
 * coverage reaches 100.00 % and escapes vanish only where that is so, and estimated escapes never vanish.
 */
export type NumberFormats = {
  count(value: Known): Figure
  /** 98.80 %; 100.00 % only for 1 exactly, 0.00 % only for 0. */
  coverage(fraction: Known): Figure
  /** 98.797, for columns under a head that says %. */
  coverageInTable(fraction: Known): string
  /** +0.053 %; what rounds to nothing is 0 without a sign. */
  coverageChange(fraction: Known): Figure
  /** 8.24 ms; below 0.1 three significant digits. */
  milliseconds(ms: Known): Figure
  /** 744 DPPM, below 10 one digit, "under 0.1" for less. */
  dppm(parts: Known): Figure
  /** What a device costs, for a thousand of them: €0.371. */
  costPerThousand(costPerDevice: Known, currency: string): Figure
  /** €25.4 k. */
  money(amount: Known, currency: string): Figure
  /** 106 h, below 10 one digit. */
  hours(hours: Known): Figure
  /** 94.0 %, for yields and shares; 100.0 % only for 1 exactly, 0.0 % only for 0. */
  share(fraction: Known): Figure
  /** 14.2 s under a minute, 1:08 min above, 1:02:05 h above an hour. */
  duration(seconds: Known): Figure
  /** A plain number with up to so many significant digits, for assumptions. */
  plain(value: Known, significant?: number): string
}

type Known = number | null | undefined

/** Returns the formats with a locale's separators, such as `en`. */
export function numberFormats(locale: string): NumberFormats {
  const cache = new Map<string, Intl.NumberFormat>()
  const fixed = (value: number, digits: number): string => {
    const key = `f${digits}`
    let format = cache.get(key)
    if (format === undefined) {
      format = new Intl.NumberFormat(locale, { minimumFractionDigits: digits, maximumFractionDigits: digits })
      cache.set(key, format)
    }
    return withMinusSign(format.format(value))
  }
  const significant = (value: number, digits: number): string =>
    value === 0 ? fixed(0, 0) : fixed(value, Math.max(0, digits - 1 - exponentOf(value, digits)))

  const percent = (fraction: number, digits: number): string => {
    const step = 10 ** -digits
    const shown = fraction * 100
    if (fraction < 1 && shown > 100 - step / 2) return fixed(100 - step, digits)
    if (fraction > 0 && shown < step / 2) return fixed(step, digits)
    return fixed(shown, digits)
  }
  const known = (value: Known, show: (value: number) => Figure): Figure =>
    typeof value === 'number' && Number.isFinite(value) ? show(value) : NOT_KNOWN

  return {
    count: (value) => known(value, (count) => ({ value: fixed(count, 0), unit: '' })),
    coverage: (fraction) => known(fraction, (share) => ({ value: percent(share, 2), unit: '%' })),
    coverageInTable: (fraction) => known(fraction, (share) => ({ value: percent(share, 3), unit: '' })).value,
    coverageChange: (fraction) =>
      known(fraction, (change) => ({ value: signed(change * 100, 3), unit: '%' })),
    milliseconds: (ms) =>
      known(ms, (time) => ({
        value: Math.abs(time) < 0.1 ? significant(time, 3) : fixed(time, 2),
        unit: 'ms',
      })),
    dppm: (parts) => known(parts, (value) => ({ value: dppmValue(value), unit: 'DPPM' })),
    costPerThousand: (cost, currency) =>
      known(cost, (each) => ({
        value: `${currency}${significant(each * 1000, 3)}`,
        unit: 'per 1,000 devices',
      })),
    money: (amount, currency) =>
      known(amount, (sum) => {
        const [scale, unit] = scaleOf(Math.abs(sum))
        return {
          value: `${sum < 0 ? '\u2212' : ''}${currency}${significant(Math.abs(sum) / scale, 3)}`,
          unit,
        }
      }),
    hours: (hours) =>
      known(hours, (time) => ({ value: time < 10 ? significant(time, 2) : fixed(time, 0), unit: 'h' })),
    share: (fraction) => known(fraction, (share) => ({ value: percent(share, 1), unit: '%' })),
    duration: (seconds) => known(seconds, duration),
    plain: (value, digits = 6) =>
      known(value, (number) => ({
        value: withMinusSign(number.toLocaleString(locale, { maximumSignificantDigits: digits })),
        unit: '',
      })).value,
  }

  function dppmValue(parts: number): string {
    if (parts < 0.05) return `under${NO_BREAK_SPACE}${fixed(0.1, 1)}`
    return parts < 9.95 ? fixed(parts, 1) : fixed(parts, 0)
  }

  function signed(value: number, digits: number): string {
    const shown = fixed(Math.abs(value), digits)
    if (Number(Math.abs(value).toFixed(digits)) === 0) return '0'
    return `${value < 0 ? '\u2212' : '+'}${shown}`
  }

  function duration(seconds: number): Figure {
    if (seconds < 59.95) return { value: fixed(seconds, 1), unit: 's' }
    const whole = Math.round(seconds)
    const two = (value: number): string => String(value).padStart(2, '0')
    const minutes = Math.floor(whole / 60)
    if (minutes < 60) return { value: `${minutes}:${two(whole % 60)}`, unit: 'min' }
    return { value: `${Math.floor(minutes / 60)}:${two(minutes % 60)}:${two(whole % 60)}`, unit: 'h' }
  }
}

/** The power of ten of the first digit after rounding to so many significant digits. */
function exponentOf(value: number, digits: number): number {
  return Number(
    Math.abs(value)
      .toExponential(digits - 1)
      .split('e')[1],
  )
}

function scaleOf(amount: number): readonly [number, string] {
  if (amount >= 999_500_000) return [1e9, 'bn']
  if (amount >= 999_500) return [1e6, 'm']
  if (amount >= 999.5) return [1e3, 'k']
  return [1, '']
}

function withMinusSign(text: string): string {
  return text.replace('-', '\u2212')
}
