import { escapeMarkup } from '../printable.ts'
import { PALETTE } from './palette.ts'

type Attributes = Readonly<Record<string, string | number>>

/** Returns one element with its attributes; children are markup already. */
export function element(name: string, attributes: Attributes, ...children: readonly string[]): string {
  const list = Object.entries(attributes).map(
    ([key, value]) => ` ${key}="${typeof value === 'number' ? round(value) : escapeMarkup(value)}"`,
  )
  return `<${name}${list.join('')}>${children.join('')}</${name}>`
}

export function line(x1: number, y1: number, x2: number, y2: number, attributes: Attributes): string {
  return element('line', { x1, y1, x2, y2, ...attributes })
}

/** Returns a text of 11 units, `anchor` start, middle or end. */
export function label(
  x: number,
  y: number,
  text: string,
  anchor: 'start' | 'middle' | 'end' = 'start',
  attributes: Attributes = {},
): string {
  return element(
    'text',
    { x, y, 'font-size': 11, fill: PALETTE.text2, 'text-anchor': anchor, ...attributes },
    escapeMarkup(text),
  )
}

/** Returns the path of a polyline through the points. */
export function path(points: readonly (readonly [number, number])[], attributes: Attributes): string {
  const d = points.map(([x, y], at) => `${at === 0 ? 'M' : 'L'}${round(x)} ${round(y)}`).join('')
  return element('path', { d, fill: 'none', 'stroke-linejoin': 'round', ...attributes })
}

function round(value: number): number {
  return Math.round(value * 100) / 100
}
