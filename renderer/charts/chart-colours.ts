/** The plain colours that charts are drawn in; the screen's tokens give them for one theme. */
export type ChartColours = {
  readonly surface: string
  readonly ground: string
  readonly inside: string
  readonly text: string
  readonly text2: string
  readonly text3: string
  readonly line: string
  readonly lineStrong: string
  readonly limit: string
  readonly bad: string
  readonly ceiling: string
  readonly hatch: string
  readonly cut: string
  readonly cutText: string
  readonly cutOn: string
  readonly series: readonly [string, string, string, string, string, string]
}

export type LineLook = {
  readonly colour: string
  /** Lengths of dash and gap; empty for a solid line. */
  readonly dash: readonly number[]
  readonly width: number
}

export type LineName = 'steepest' | 'as-delivered' | 'smallest' | 'by-hand' | 'ceiling'

/** Returns how a line is drawn: colour, dash and width together, so that no line stands on its colour alone. */
export function lineLook(name: LineName, colours: ChartColours): LineLook {
  switch (name) {
    case 'steepest':
      return { colour: colours.series[0], dash: [], width: 2.4 }
    case 'as-delivered':
      return { colour: colours.series[1], dash: [8, 4], width: 1.7 }
    case 'smallest':
      return { colour: colours.series[2], dash: [2, 3], width: 2 }
    case 'by-hand':
      return { colour: colours.series[4], dash: [5, 2], width: 2 }
    case 'ceiling':
      return { colour: colours.ceiling, dash: [1, 3], width: 1.3 }
  }
}
