import type { FaultList } from '../faults/fault-list.ts'
import type { Random } from '../source/random.ts'

/** Faults drawn from a list, as classes to simulate and how many of the drawn faults each stands for. */
export type FaultSample = {
  readonly size: number
  /** Ascending. */
  readonly classes: Uint32Array
  /** Length classes.length. */
  readonly drawn: Uint32Array
}

/**
 * Draws two samples of uncollapsed faults without a fault in common: one to choose an order on, and one to quote its
 * coverage from, since an order looks better on the sample that it was chosen on. Faults that the chain test covers are
 * not drawn. A population too small for both gives each at most half. `from` are the faults to draw from, where not all.
 */
export function drawTwoSamples(
  faults: FaultList,
  size: number,
  random: Random,
  from: Uint32Array = sampledPopulation(faults),
): { choose: FaultSample; quote: FaultSample } {
  const population = from.slice()
  const each = Math.min(size, population.length >>> 1)
  drawToFront(population, 2 * each, random)
  return {
    choose: sampleOf(faults, population.subarray(0, each)),
    quote: sampleOf(faults, population.subarray(each, 2 * each)),
  }
}

/** Draws one sample of uncollapsed faults, each fault at most once; at most the whole list. */
export function drawSample(faults: FaultList, size: number, random: Random): FaultSample {
  const population = sampledPopulation(faults)
  const length = Math.min(size, population.length)
  drawToFront(population, length, random)
  return sampleOf(faults, population.subarray(0, length))
}

/** Returns the faults that samples are drawn from: all but those that the chain test covers. */
export function sampledPopulation({ lines, nFaults }: FaultList): Uint32Array {
  return Uint32Array.from({ length: nFaults }, (_, fault) => fault).filter(
    (fault) => lines.byChainTest[fault >>> 1] === 0,
  )
}

/** Returns how many faults of the population each class stands for, length nClasses: the drawn ones, scaled up. */
export function standsFor(
  { size, classes, drawn }: FaultSample,
  population: number,
  nClasses: number,
): Float64Array {
  const stands = new Float64Array(nClasses)
  for (let at = 0; at < classes.length; at++) stands[classes[at]] = (drawn[at] * population) / size
  return stands
}

/** SOURCE: the first steps of the shuffle of Fisher & Yates 1938 (Durstenfeld 1964). */
function drawToFront(items: Uint32Array, count: number, random: Random): void {
  for (let at = 0; at < count; at++) {
    const other = at + random.below(items.length - at)
    const held = items[at]
    items[at] = items[other]
    items[other] = held
  }
}

function sampleOf(faults: FaultList, drawn: Uint32Array): FaultSample {
  const times = new Uint32Array(faults.nClasses)
  for (const fault of drawn) times[faults.classOf[fault]]++
  const classes = Uint32Array.from(times.keys()).filter((group) => times[group] > 0)
  return { size: drawn.length, classes, drawn: classes.map((group) => times[group]) }
}
