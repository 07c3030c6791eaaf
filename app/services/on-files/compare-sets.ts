import { AppError } from '../../contract/errors.ts'
import {
  compareAtCuts,
  wholeSet,
  type CutComparison,
  type DeliveredSet,
  type SetPoint,
} from '../../engine/compare/compare-at-cuts.ts'
import { compareDetections, type DetectionComparison } from '../../engine/compare/compare-detections.ts'
import { scanFactsOf } from '../../engine/choose/choice-basis.ts'
import type { Netlist } from '../../engine/circuit/netlist.ts'
import type { FaultList } from '../../engine/faults/fault-list.ts'
import type { Product } from '../../engine/quality/product.ts'
import { detectedAfter } from '../../engine/simulate/detected-after.ts'
import type { DetectionProfile } from '../../engine/simulate/detection-profile.ts'
import type { PatternSet } from '../../engine/simulate/pattern-set.ts'
import type { Tester } from '../../engine/tester/tester.ts'
import { buildTimeModel, timeColumns } from '../../engine/tester/time-model.ts'

/** A pattern set that was simulated, under the name by which it is compared. */
export type MeasuredSet = {
  readonly name: string
  readonly netlist: Netlist
  readonly faults: FaultList
  readonly patterns: PatternSet
  readonly profile: DetectionProfile
  readonly tester: Tester
  readonly product: Product
}

export type SetComparison = {
  readonly sets: readonly (SetPoint & { readonly name: string })[]
  /** The first set against each of the others. */
  readonly pairs: readonly (DetectionComparison &
    CutComparison & {
      readonly first: string
      readonly second: string
      /** True where the second covers less than the first. */
      readonly isWorse: boolean
    })[]
}

/** Compares the first set with each of the others. Throws AppError 'bad-input' where their faults stand on different bases. */
export function compareSets(sets: readonly MeasuredSet[]): SetComparison {
  const all = sets.map((set) => ({ set, delivered: deliveredSet(set) }))
  const points = all.map(({ set, delivered }) => ({ name: set.name, ...wholeSet(delivered) }))
  const [first, ...others] = all
  if (first === undefined) return { sets: [], pairs: [] }
  const odd = sets.find(({ faults }) => faults.base !== first.set.faults.base)
  if (odd !== undefined) {
    throw new AppError(
      'bad-input',
      `${first.set.name} counts faults on ${first.set.faults.base}, ${odd.name} on ${odd.faults.base}: the two are never compared.`,
    )
  }
  return {
    sets: points,
    pairs: others.map(({ set, delivered }) => ({
      first: first.set.name,
      second: set.name,
      isWorse: wholeSet(delivered).coverage < wholeSet(first.delivered).coverage,
      ...compareDetections(first.set, set),
      ...compareAtCuts(first.delivered, delivered),
    })),
  }
}

function deliveredSet({ netlist, faults, patterns, profile, tester, product }: MeasuredSet): DeliveredSet {
  const time = buildTimeModel(tester, product, patterns, scanFactsOf(netlist))
  const sequence = Uint32Array.from({ length: patterns.nPatterns }, (_, pattern) => pattern)
  const { cycles, milliseconds } = timeColumns(
    time,
    sequence,
    tester.scanMemory !== null,
    product.otherCycles,
  )
  return { detected: detectedAfter(faults, profile), cycles, milliseconds, total: faults.nFaults }
}
