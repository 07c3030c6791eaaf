import type { ChoiceRules } from './choice-rules.ts'
import type { Order } from './order.ts'

/**
 * Returns, for each k from 0 to nPatterns, 1 where the first k patterns of the order make a choice that the rules allow:
 * whole groups, all that is kept, nothing that is left out.
 */
export function cutPlaces(order: Order, rules: ChoiceRules): Uint8Array<ArrayBuffer> {
  const { unitOf, unitStart, kept } = rules
  const places = new Uint8Array(rules.nPatterns + 1)
  let keptLeft = kept.reduce((sum, one) => sum + one, 0)
  if (keptLeft === 0) places[0] = 1
  for (let k = 0; k < order.runs;) {
    const unit = unitOf[order.sequence[k]]
    k += unitStart[unit + 1] - unitStart[unit]
    keptLeft -= kept[unit]
    if (keptLeft === 0) places[k] = 1
  }
  return places
}
