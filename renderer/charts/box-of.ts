/** Where an element lies, in its own pixels: those that its content is drawn in, however much the window is zoomed. */
export type Box = {
  readonly left: number
  readonly top: number
  readonly width: number
  readonly height: number
  /** Where a pointer is inside the element. */
  placeOf(event: MouseEvent): { readonly x: number; readonly y: number }
}

export function boxOf(element: Element): Box {
  const { left, top, width, height } = element.getBoundingClientRect()
  // Browsers without it have no zoom that would part the two kinds of pixels.
  const zoom = element.currentCSSZoom || 1
  return {
    left: left / zoom,
    top: top / zoom,
    width: width / zoom,
    height: height / zoom,
    placeOf: ({ clientX, clientY }) => ({ x: (clientX - left) / zoom, y: (clientY - top) / zoom }),
  }
}
