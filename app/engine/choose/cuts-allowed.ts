import type { ChoiceRules } from './choice-rules.ts'
import type { Order } from './order.ts'

/**
 * Returns where constraints let a cut of an order lie, length nPatterns + 1, 1 for each prefix allowed: it splits no
 * group that stays together and holds all that is kept. Null where every prefix is.
 */
export function cutsAllowed(rules: ChoiceRules, { sequence, runs }: Order): Uint8Array | null {
  const unitAt = (place: number): number => rules.unitOf[sequence[place]]
  let shortest = 0
  for (let place = 0; place < runs; place++) if (rules.kept[unitAt(place)] === 1) shortest = place + 1
  const allowed = new Uint8Array(sequence.length + 1)
  let count = 0
  for (let k = shortest; k <= runs; k++) {
    if (k > 0 && k < runs && unitAt(k - 1) === unitAt(k)) continue
    allowed[k] = 1
    count++
  }
  return count === sequence.length + 1 ? null : allowed
}
