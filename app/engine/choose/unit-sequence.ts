import type { ChoiceRules } from './choice-rules.ts'
import type { Order } from './order.ts'

/** Collects units one after the other and writes them out as an order of patterns. */
export class UnitSequence {
  readonly rules: ChoiceRules
  readonly units: number[] = []
  /** Length nUnits, 1 where the unit is placed. */
  readonly placed: Uint8Array

  constructor(rules: ChoiceRules) {
    this.rules = rules
    this.placed = new Uint8Array(rules.nUnits)
  }

  place(unit: number): void {
    this.placed[unit] = 1
    this.units.push(unit)
  }

  /** True where all that has to run before the unit is placed. */
  isReady(unit: number): boolean {
    const { predecessorStart, predecessors } = this.rules
    for (let at = predecessorStart[unit]; at < predecessorStart[unit + 1]; at++) {
      if (this.placed[predecessors[at]] === 0) return false
    }
    return true
  }

  /** Returns the units that are not placed and have to be for this one to run, each after its own predecessors; it comes last. */
  missingFor(unit: number): number[] {
    const { predecessorStart, predecessors } = this.rules
    const found: number[] = []
    const seen = new Set<number>([unit])
    const stack = [{ unit, next: predecessorStart[unit] }]
    while (stack.length > 0) {
      const top = stack[stack.length - 1]
      if (top.next === predecessorStart[top.unit + 1]) {
        found.push(top.unit)
        stack.pop()
        continue
      }
      const before = predecessors[top.next++]
      if (this.placed[before] === 1 || seen.has(before)) continue
      seen.add(before)
      stack.push({ unit: before, next: predecessorStart[before] })
    }
    return found
  }

  placeWithPredecessors(unit: number): void {
    if (this.placed[unit] === 1) return
    for (const one of this.missingFor(unit)) this.place(one)
  }

  /** Returns the patterns of the units placed so far, in the order in which they run. */
  patterns(): Uint32Array {
    const { unitStart, unitPatterns } = this.rules
    return Uint32Array.from(
      this.units.flatMap((unit) => [...unitPatterns.subarray(unitStart[unit], unitStart[unit + 1])]),
    )
  }

  /** Returns the order: what was placed, then the other units in file order, then the patterns left out. */
  finish(name: Order['name'], chosenUnits: number): Order {
    const { nPatterns, nUnits, unitOf, unitStart } = this.rules
    for (let unit = 0; unit < nUnits; unit++) this.placeWithPredecessors(unit)
    const running = this.patterns()
    const sequence = new Uint32Array(nPatterns)
    sequence.set(running)
    let length = running.length
    for (let pattern = 0; pattern < nPatterns; pattern++)
      if (unitOf[pattern] < 0) sequence[length++] = pattern
    let chosen = 0
    for (const unit of this.units.slice(0, chosenUnits)) chosen += unitStart[unit + 1] - unitStart[unit]
    return { name, sequence, chosen, runs: running.length }
  }
}
