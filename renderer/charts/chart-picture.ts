import { FONT, type Palette } from '../tokens.ts'
import { boxOf } from './box-of.ts'

export type Picture = {
  readonly title: string
  /** Base, run and date, in small type below the title. */
  readonly note: string
  readonly palette: Palette
}

const HEAD = 52

/**
 * Returns a chart as one SVG text that stands by itself: its layers one above the other under a title, every colour and
 * font that a style sheet gives written into the elements.
 */
export function chartSvg(chart: HTMLElement, { title, note, palette }: Picture): string {
  const outer = boxOf(chart)
  const { width, height } = outer
  const layers = [...chart.querySelectorAll('svg')].map((svg) => {
    const copy = svg.cloneNode(true) as SVGSVGElement
    writeStyles(svg, copy)
    const own = boxOf(svg)
    copy.setAttribute('x', String(own.left - outer.left))
    copy.setAttribute('y', String(own.top - outer.top + HEAD))
    return new XMLSerializer().serializeToString(copy)
  })
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${height + HEAD}" viewBox="0 0 ${width} ${height + HEAD}">`,
    `<rect width="100%" height="100%" fill="${palette.surface}"/>`,
    `<text x="12" y="22" font-family='${FONT}' font-size="15" font-weight="600" fill="${palette.text}">${escaped(title)}</text>`,
    `<text x="12" y="40" font-family='${FONT}' font-size="11" fill="${palette.text2}">${escaped(note)}</text>`,
    ...layers,
    '</svg>',
  ].join('\n')
}

/** Draws an SVG text at twice its size. */
export async function svgToPng(svg: string): Promise<Blob> {
  const image = new Image()
  image.src = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(svg)}`
  await image.decode()
  const canvas = document.createElement('canvas')
  canvas.width = image.width * 2
  canvas.height = image.height * 2
  canvas.getContext('2d')?.drawImage(image, 0, 0, canvas.width, canvas.height)
  return new Promise((resolve, reject) => {
    canvas.toBlob(
      (blob) => (blob ? resolve(blob) : reject(new Error('the picture could not be drawn'))),
      'image/png',
    )
  })
}

const STYLES = [
  'fill',
  'stroke',
  'stroke-width',
  'stroke-dasharray',
  'stroke-linecap',
  'stroke-linejoin',
  'paint-order',
  'opacity',
  'font-family',
  'font-size',
  'font-weight',
]

function writeStyles(from: Element, to: Element): void {
  const style = getComputedStyle(from)
  for (const name of STYLES) to.setAttribute(name, style.getPropertyValue(name))
  for (let at = 0; at < from.children.length; at++) {
    const child = from.children[at]
    const copy = to.children[at]
    if (child && copy) writeStyles(child, copy)
  }
}

function escaped(text: string): string {
  return text.replaceAll('&', '&amp;').replaceAll('<', '&lt;')
}
