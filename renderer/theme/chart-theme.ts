import { FONT, type Palette } from '../tokens.ts'

/** Returns the theme that ECharts is started with. */
export function chartTheme(palette: Palette): object {
  const axis = {
    axisLine: { show: true, lineStyle: { color: palette.lineStrong, width: 1 } },
    axisTick: { show: true, lineStyle: { color: palette.lineStrong } },
    axisLabel: { color: palette.text2, fontSize: 11, fontFamily: FONT },
    nameTextStyle: { color: palette.text2, fontSize: 11, fontFamily: FONT },
    splitLine: { lineStyle: { color: palette.line, width: 1 } },
    splitArea: { show: false },
  }
  return {
    backgroundColor: 'transparent',
    color: [
      palette.series1,
      palette.series2,
      palette.series3,
      palette.series4,
      palette.series5,
      palette.series6,
    ],
    textStyle: { color: palette.text2, fontFamily: FONT, fontSize: 11 },
    valueAxis: axis,
    categoryAxis: { ...axis, splitLine: { show: false } },
    tooltip: {
      backgroundColor: palette.surfaceRaised,
      borderColor: palette.lineStrong,
      borderWidth: 1,
      padding: [6, 10],
      textStyle: { color: palette.text, fontFamily: FONT, fontSize: 12 },
      extraCssText: `box-shadow: ${palette.shadow}; border-radius: 6px`,
    },
  }
}
