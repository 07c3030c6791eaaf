/** What a pattern set detects and takes as delivered: columns of length nPatterns + 1, entry k for its first k patterns. */
export type DeliveredSet = {
  /** Uncollapsed faults. */
  readonly detected: Float64Array
  readonly cycles: Float64Array
  readonly milliseconds: Float64Array
  /** All faults of the base. */
  readonly total: number
}

export type SetPoint = {
  readonly patterns: number
  readonly detected: number
  readonly coverage: number
  readonly cycles: number
  readonly milliseconds: number
}

export type CutComparison = {
  /** The longest prefixes within the time of the shorter set. */
  readonly equalTime: { readonly first: SetPoint; readonly second: SetPoint }
  /** The shortest prefixes with the coverage of the set that has less. */
  readonly equalCoverage: { readonly first: SetPoint; readonly second: SetPoint }
}

/** Compares two sets as delivered, once cut to the same time on one site and once to the same coverage. */
export function compareAtCuts(first: DeliveredSet, second: DeliveredSet): CutComparison {
  const time = Math.min(last(first.milliseconds), last(second.milliseconds)) * (1 + 1e-12)
  const least = Math.min(coverageAt(first, length(first)), coverageAt(second, length(second)))
  const within = (set: DeliveredSet): SetPoint =>
    pointAt(
      set,
      set.milliseconds.findLastIndex((ms) => ms <= time),
    )
  const reaching = (set: DeliveredSet): SetPoint =>
    pointAt(
      set,
      set.detected.findIndex((_, k) => coverageAt(set, k) >= least),
    )
  return {
    equalTime: { first: within(first), second: within(second) },
    equalCoverage: { first: reaching(first), second: reaching(second) },
  }
}

export function wholeSet(set: DeliveredSet): SetPoint {
  return pointAt(set, length(set))
}

function pointAt(set: DeliveredSet, patterns: number): SetPoint {
  return {
    patterns,
    detected: set.detected[patterns],
    coverage: coverageAt(set, patterns),
    cycles: set.cycles[patterns],
    milliseconds: set.milliseconds[patterns],
  }
}

function coverageAt({ detected, total }: DeliveredSet, k: number): number {
  return total > 0 ? detected[k] / total : 0
}

function length({ detected }: DeliveredSet): number {
  return detected.length - 1
}

function last(values: Float64Array): number {
  return values[values.length - 1]
}
