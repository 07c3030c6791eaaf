/** Returns round values, each a multiple of 1, 2 or 5 × 10ⁿ, inside a range: as many as fit without passing `most`. */
export function niceTicks(from: number, to: number, most: number): number[] {
  if (!(to > from) || most < 1) return []
  const step = niceStep((to - from) / most)
  const first = Math.ceil(from / step - 1e-9)
  const last = Math.floor(to / step + 1e-9)
  // Multiples are divided where the step is a fraction: 3 × 0.1 would not be 0.3.
  const inverse = Math.round(1 / step)
  return Array.from({ length: Math.max(0, last - first + 1) }, (_, index) =>
    step < 1 ? (first + index) / inverse : (first + index) * step,
  )
}

/** The digits after the point that tell ticks apart. */
export function tickDigits(ticks: readonly number[]): number {
  const [first = 0, second = first + 1] = ticks
  return Math.max(0, -Math.floor(Math.log10(Math.abs(second - first)) + 1e-9))
}

function niceStep(atLeast: number): number {
  const power = 10 ** Math.floor(Math.log10(atLeast))
  const factor = [1, 2, 5, 10].find((each) => each * power >= atLeast * (1 - 1e-9)) ?? 10
  return factor * power
}
