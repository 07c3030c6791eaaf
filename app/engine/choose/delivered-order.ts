import type { ChoiceRules } from './choice-rules.ts'
import type { Order } from './order.ts'
import { UnitSequence } from './unit-sequence.ts'

/**
 * Returns the patterns in file order, changed only where constraints demand it: what is fixed first and kept moves to
 * the front, groups close up at their first pattern, and a pattern waits for those that have to run before it.
 */
export function deliveredOrder(rules: ChoiceRules): Order {
  return inSequence(rules, 'as-delivered', rules.unitPatterns.toSorted())
}

/**
 * Returns the order that a person wants, changed only where constraints demand it, as in deliveredOrder. Patterns that
 * the list leaves out follow in file order; `chosen` counts them too.
 */
export function handOrder(rules: ChoiceRules, wanted: Iterable<number>): Order {
  return inSequence(rules, 'by-hand', wanted)
}

function inSequence(rules: ChoiceRules, name: Order['name'], patterns: Iterable<number>): Order {
  const units = new UnitSequence(rules)
  const wanted = Array.from(patterns, (pattern) => rules.unitOf[pattern]).filter((unit) => unit >= 0)
  for (const unit of rules.first) units.place(unit)
  for (const unit of wanted) if (rules.kept[unit] === 1) units.placeWithPredecessors(unit)
  for (let unit = 0; unit < rules.nUnits; unit++)
    if (rules.kept[unit] === 1) units.placeWithPredecessors(unit)
  for (const unit of wanted) units.placeWithPredecessors(unit)
  return units.finish(name, rules.nUnits)
}
