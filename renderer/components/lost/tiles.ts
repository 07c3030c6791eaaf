export type Tile = { readonly x: number; readonly y: number; readonly width: number; readonly height: number }

/**
 * Returns rectangles that fill an area in proportion to values, descending, as square as rows allow.
 * SOURCE: squarified treemaps, Bruls, Huizing & van Wijk 2000.
 */
export function tilesOf(values: readonly number[], width: number, height: number): Tile[] {
  const total = values.reduce((sum, value) => sum + value, 0)
  if (total <= 0) return values.map(() => ({ x: 0, y: 0, width: 0, height: 0 }))
  const areas = values.map((value) => (value / total) * width * height)
  const tiles: Tile[] = []
  let x = 0
  let y = 0
  let left = width
  let high = height
  let at = 0
  while (at < areas.length) {
    const side = Math.min(left, high)
    let end = at + 1
    while (end < areas.length && worst(areas.slice(at, end + 1), side) <= worst(areas.slice(at, end), side))
      end++
    const row = areas.slice(at, end)
    const depth = row.reduce((sum, area) => sum + area, 0) / side
    let along = 0
    for (const area of row) {
      const length = area / depth
      tiles.push(
        left >= high
          ? { x, y: y + along, width: depth, height: length }
          : { x: x + along, y, width: length, height: depth },
      )
      along += length
    }
    if (left >= high) {
      x += depth
      left -= depth
    } else {
      y += depth
      high -= depth
    }
    at = end
  }
  return tiles
}

/** The least square of a row's rectangles, as its longer side over its shorter. */
function worst(row: readonly number[], side: number): number {
  const sum = row.reduce((all, area) => all + area, 0)
  return Math.max(
    ...row.map((area) => Math.max((side * side * area) / (sum * sum), (sum * sum) / (side * side * area))),
  )
}
