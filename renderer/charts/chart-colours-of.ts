import type { Palette } from '../tokens.ts'
import type { ChartColours } from './chart-colours.ts'

/** Returns the colours of charts as the tokens of a theme give them. */
export function chartColours(palette: Palette): ChartColours {
  return {
    surface: palette.surface,
    ground: palette.chartGround,
    inside: palette.chartInside,
    text: palette.text,
    text2: palette.text2,
    text3: palette.text3,
    line: palette.line,
    lineStrong: palette.lineStrong,
    limit: palette.limit,
    bad: palette.bad,
    ceiling: palette.ceiling,
    hatch: palette.hatch,
    cut: palette.cut,
    cutText: palette.cutText,
    cutOn: palette.cutOn,
    series: [
      palette.series1,
      palette.series2,
      palette.series3,
      palette.series4,
      palette.series5,
      palette.series6,
    ],
  }
}
