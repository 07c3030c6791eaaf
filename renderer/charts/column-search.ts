/** Returns the first index whose value is above one given, in values that do not descend; their length where none is. */
export function firstAbove(values: ArrayLike<number>, value: number): number {
  return firstWhere(values.length, (index) => (values[index] ?? 0) > value)
}

/** Returns the first index whose value is at least one given, in values that do not descend; their length where none is. */
export function firstAtLeast(values: ArrayLike<number>, value: number): number {
  return firstWhere(values.length, (index) => (values[index] ?? 0) >= value)
}

/** Returns the index whose value is nearest to one given, in values that do not descend; the first of equals. */
export function nearestIndex(values: ArrayLike<number>, value: number): number {
  const after = Math.min(firstAtLeast(values, value), values.length - 1)
  if (after <= 0) return 0
  const below = values[after - 1] ?? 0
  return value - below <= (values[after] ?? 0) - value ? firstAtLeast(values, below) : after
}

/** Returns the value at a place between two indices. */
export function valueBetween(values: ArrayLike<number>, place: number): number {
  const last = values.length - 1
  const below = Math.min(Math.max(Math.floor(place), 0), last)
  const above = Math.min(below + 1, last)
  const low = values[below] ?? 0
  return low + ((values[above] ?? 0) - low) * Math.min(Math.max(place - below, 0), 1)
}

/** Returns the place, between two indices where need be, at which values that do not descend take one given. */
export function placeOf(values: ArrayLike<number>, value: number): number {
  const after = firstAtLeast(values, value)
  if (after <= 0) return 0
  if (after >= values.length) return values.length - 1
  const low = values[after - 1] ?? 0
  return after - 1 + (value - low) / ((values[after] ?? 0) - low)
}

function firstWhere(length: number, holds: (index: number) => boolean): number {
  let low = 0
  let high = length
  while (low < high) {
    const middle = (low + high) >>> 1
    if (holds(middle)) high = middle
    else low = middle + 1
  }
  return low
}
