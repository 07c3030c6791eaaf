export type Size = { readonly width: number; readonly height: number }

export type Span = { readonly from: number; readonly to: number }

/** The edges of the plot in pixels of its chart. */
export type Plot = {
  readonly left: number
  readonly right: number
  readonly top: number
  readonly bottom: number
}

/** What part of the curves is in view, in values of the axes. */
export type Window = { readonly x: Span; readonly y: Span }

export const MARGINS = { left: 66, right: 70, top: 27, bottom: 46 } as const

export function plotOf({ width, height }: Size): Plot {
  return {
    left: MARGINS.left,
    right: Math.max(MARGINS.left + 1, width - MARGINS.right),
    top: MARGINS.top,
    bottom: Math.max(MARGINS.top + 1, height - MARGINS.bottom),
  }
}

/** Returns where a value stands between two pixels. */
export function pixelOf(value: number, span: Span, from: number, to: number): number {
  return from + ((to - from) * (value - span.from)) / (span.to - span.from)
}

export function valueAt(pixel: number, span: Span, from: number, to: number): number {
  return span.from + ((span.to - span.from) * (pixel - from)) / (to - from)
}

export function xPixel(value: number, window: Window, plot: Plot): number {
  return pixelOf(value, window.x, plot.left, plot.right)
}

export function yPixel(value: number, window: Window, plot: Plot): number {
  return pixelOf(value, window.y, plot.bottom, plot.top)
}

export function clamp(value: number, least: number, most: number): number {
  return Math.min(Math.max(value, least), most)
}
