import { NOT_KNOWN, numberFormats, textOf, type Figure } from '../app/contract/format-number.ts'

/** Number formats with the separators of the user's language. */
export const formats = numberFormats(navigator.language || 'en')

const day = new Intl.DateTimeFormat(navigator.language || 'en', {
  day: 'numeric',
  month: 'short',
  year: 'numeric',
})
const minute = new Intl.DateTimeFormat(navigator.language || 'en', {
  hour: '2-digit',
  minute: '2-digit',
  hourCycle: 'h23',
})

/** Returns a date as people say it: "today, 08:12", else day, month and year. */
export function dayText(atMs: number, now: number = Date.now()): string {
  const date = new Date(atMs)
  return date.toDateString() === new Date(now).toDateString()
    ? `today, ${minute.format(date)}`
    : day.format(date)
}

export function timeLeft(seconds: number): string {
  return `${textOf(formats.duration(seconds))} left`
}

/** Returns a count with its noun: "1 pattern", "1,024 patterns", "12 latches". */
export function countOf(count: number, noun: string): string {
  const plural = /(?:ch|x|s)$/.test(noun) ? 'es' : 's'
  return `${formats.count(count).value} ${noun}${count === 1 ? '' : plural}`
}

export { NOT_KNOWN, textOf, type Figure }
