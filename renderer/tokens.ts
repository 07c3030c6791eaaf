/**
 * The one place where colours, sizes and type are written down. It writes the custom properties that styles use, and
 * hands plain values to what can't resolve them (Naive UI, ECharts).
 */
export type Scheme = 'light' | 'dark'

const COLOURS = {
  // Surfaces. The chrome is monochrome; colour belongs to data.
  ground: ['#eef1f0', '#0e1312'],
  surface: ['#ffffff', '#151b1a'],
  surfaceSunk: ['#f5f7f6', '#101615'],
  /** Outside and inside all limits of a chart: a cut may lie inside. */
  chartGround: ['#edf1ef', '#101615'],
  chartInside: ['#ffffff', '#1f2826'],
  surfaceRaised: ['#ffffff', '#1e2624'],
  hover: ['#eef2f1', '#1f2826'],
  selected: ['#e1e8e6', '#29342f'],
  // Text. The third is the faintest for anything that must be read: 4.5:1 on every surface.
  text: ['#15201d', '#e8eeec'],
  text2: ['#46544f', '#b3bfbb'],
  text3: ['#5c6a65', '#93a19c'],
  textInverse: ['#ffffff', '#10201b'],
  // Lines: rows and gridlines, section edges and axes, borders of controls (3:1).
  line: ['#dde3e1', '#29322f'],
  lineStrong: ['#b7c2be', '#46534e'],
  lineControl: ['#7d8b86', '#75847e'],
  // The one warm colour: what the user decides.
  cut: ['#bf4408', '#ff9a5c'],
  cutText: ['#a83a04', '#ffac78'],
  cutOn: ['#ffffff', '#2b1002'],
  cutWash: ['#fdf0e8', '#2c1e15'],
  // What can be acted on is ink; links and focus are the exception.
  ink: ['#1b2a26', '#dfe8e5'],
  inkHover: ['#2d3f39', '#f4f8f7'],
  link: ['#17579c', '#82bbff'],
  focus: ['#1a6fd0', '#7db8ff'],
  // Series. Any two, and the cut, stay 16 or more apart (CIE76) in normal, protan, deutan and tritan vision.
  series1: ['#0d62bd', '#4aa5f7'],
  series2: ['#586064', '#a8b2b5'],
  series3: ['#5a2b63', '#b785c4'],
  series4: ['#009392', '#74ece8'],
  series5: ['#9c8843', '#f3eaa0'],
  series6: ['#800032', '#ef537d'],
  ceiling: ['#15201d', '#e8eeec'],
  hatch: ['rgba(21, 32, 29, 0.17)', 'rgba(232, 238, 236, 0.15)'],
  // Fills of stacked bars, a ladder of lightness; the rest is what is unused.
  fill1: ['#0d62bd', '#2f70bd'],
  fill2: ['#3ba093', '#4fb3a4'],
  fill3: ['#d3b2dd', '#d2b8dd'],
  fillRest: ['#d7dedb', '#323d39'],
  limit: ['#33413c', '#c4cfcb'],
  // States: colour, shape and word, always all three.
  good: ['#17713f', '#63cf91'],
  caution: ['#7a5a00', '#e6c04a'],
  bad: ['#b3202c', '#ff8a8a'],
  busy: ['#0d5cb3', '#82bbff'],
  idle: ['#5c6a65', '#93a19c'],
  goodWash: ['#eaf5ee', '#14261b'],
  cautionWash: ['#fbf5e0', '#282211'],
  badWash: ['#fcedee', '#2e1718'],
  gained: ['#0d62bd', '#4aa5f7'],
  lost: ['#800032', '#ef537d'],
  shadow: [
    '0 1px 2px rgba(16, 28, 24, 0.10), 0 6px 20px rgba(16, 28, 24, 0.12)',
    '0 1px 2px rgba(0, 0, 0, 0.5), 0 6px 20px rgba(0, 0, 0, 0.45)',
  ],
} as const satisfies Record<string, readonly [light: string, dark: string]>

export type ColourName = keyof typeof COLOURS
export type Palette = Readonly<Record<ColourName, string>>

/** Dash patterns that belong to the series colours of the same number; empty is a solid line. */
export const DASHES = {
  series1: [],
  series2: [8, 4],
  series3: [2, 3],
  series4: [10, 3, 2, 3],
  series5: [5, 2],
  series6: [14, 4],
  ceiling: [1, 3],
} as const

export const FONT =
  '"Segoe UI Variable Text", "Segoe UI", -apple-system, BlinkMacSystemFont, "Adwaita Sans", Inter, Cantarell, ' +
  '"Noto Sans", "Liberation Sans", system-ui, sans-serif'
export const CODE_FONT =
  'ui-monospace, "SF Mono", "Cascadia Mono", "Noto Sans Mono", "DejaVu Sans Mono", "Liberation Mono", monospace'

/** In pixels. */
export const SIZES = {
  control: 28,
  row: 28,
  rail: 184,
  aside: 300,
  bar: 44,
  radius: 3,
  radiusFloat: 6,
} as const

const TYPE = {
  tiny: '11px/16px',
  small: '12px/16px',
  body: '13px/20px',
  lead: '15px/22px',
  answer: '19px/27px',
  title: '24px/30px',
} as const

/** Returns the plain colours of a scheme; with more contrast, lines and faint text grow stronger. */
export function paletteOf(scheme: Scheme, moreContrast = false): Palette {
  const side = scheme === 'light' ? 0 : 1
  const palette = Object.fromEntries(
    Object.entries(COLOURS).map(([name, pair]) => [name, pair[side]]),
  ) as Record<ColourName, string>
  if (moreContrast) {
    palette.line = ['#93a09b', '#6d7b75'][side] ?? palette.line
    palette.lineStrong = palette.text2
    palette.lineControl = palette.text2
    palette.text3 = palette.text2
  }
  return palette
}

/** Writes every token as a custom property, `surfaceSunk` as `--surface-sunk`, `series1` as `--series-1`. */
export function writeTokens(root: HTMLElement, scheme: Scheme, palette: Palette): void {
  const { style } = root
  for (const [name, value] of Object.entries(palette)) style.setProperty(propertyOf(name), value)
  for (const [name, value] of Object.entries(TYPE)) style.setProperty(`--t-${name}`, `${value} ${FONT}`)
  for (const [name, value] of Object.entries(SIZES)) style.setProperty(propertyOf(name), `${value}px`)
  style.setProperty('--font', FONT)
  style.setProperty('--font-code', CODE_FONT)
  style.setProperty('--focus-ring', `0 0 0 2px ${palette.surface}, 0 0 0 4px ${palette.focus}`)
  style.colorScheme = scheme
  root.dataset['theme'] = scheme
}

function propertyOf(name: string): string {
  return `--${name.replace(/[A-Z]|\d+/g, (part) => `-${part.toLowerCase()}`)}`
}
