import { expect, test } from 'vitest'
import { paletteOf, writeTokens, type ColourName } from '../../renderer/tokens.ts'

/** SOURCE: WCAG 2.2, "relative luminance" and "contrast ratio". */
function contrast(one: string, other: string): number {
  const [a, b] = [luminance(one), luminance(other)]
  return (Math.max(a, b) + 0.05) / (Math.min(a, b) + 0.05)
}

function luminance(hex: string): number {
  const [r = 0, g = 0, b = 0] = [1, 3, 5].map((at) => {
    const value = parseInt(hex.slice(at, at + 2), 16) / 255
    return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4
  })
  return 0.2126 * r + 0.7152 * g + 0.0722 * b
}

const SURFACES: readonly ColourName[] = [
  'surface',
  'surfaceSunk',
  'surfaceRaised',
  'ground',
  'hover',
  'selected',
]
const TEXTS: readonly ColourName[] = [
  'text',
  'text2',
  'text3',
  'cutText',
  'link',
  'good',
  'caution',
  'bad',
  'busy',
  'idle',
]
const SERIES: readonly ColourName[] = [
  'series1',
  'series2',
  'series3',
  'series4',
  'series5',
  'series6',
  'cut',
  'ceiling',
]

// SOURCE: WCAG 2.2, 1.4.3 (text 4.5:1) and 1.4.11 (controls and graphics 3:1).
test.each(['light', 'dark'] as const)(
  'text is 4.5:1 on every surface, controls and lines of charts 3:1, %s',
  (scheme) => {
    const palette = paletteOf(scheme)
    const short = (names: readonly ColourName[], grounds: readonly ColourName[], least: number): string[] =>
      names.flatMap((name) =>
        grounds
          .filter((ground) => contrast(palette[name], palette[ground]) < least)
          .map((ground) => `${name} on ${ground}: ${contrast(palette[name], palette[ground]).toFixed(2)}`),
      )
    expect(short(TEXTS, SURFACES, 4.5)).toEqual([])
    expect(short(['lineControl'], ['surface', 'surfaceRaised'], 3)).toEqual([])
    expect(short(SERIES, ['chartGround', 'chartInside'], 3)).toEqual([])
    expect(contrast(palette.textInverse, palette.ink)).toBeGreaterThan(4.5)
    expect(contrast(palette.cutOn, palette.cut)).toBeGreaterThan(4.5)
  },
)

test('with more contrast the faintest text is as strong as the second', () => {
  for (const scheme of ['light', 'dark'] as const) {
    const palette = paletteOf(scheme, true)
    expect(palette.text3).toBe(palette.text2)
    expect(contrast(palette.line, palette.surface)).toBeGreaterThan(
      contrast(paletteOf(scheme).line, palette.surface),
    )
  }
})

test('custom properties carry the names that styles use', () => {
  const root = document.createElement('div')
  const palette = paletteOf('dark')
  writeTokens(root, 'dark', palette)
  expect(root.style.getPropertyValue('--surface-sunk')).toBe(palette.surfaceSunk)
  expect(root.style.getPropertyValue('--series-1')).toBe(palette.series1)
  expect(root.style.getPropertyValue('--text-3')).toBe(palette.text3)
  expect(root.style.colorScheme).toBe('dark')
})
