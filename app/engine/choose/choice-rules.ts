import { type ConstraintKind, type Constraints, NO_CONSTRAINTS } from './constraints.ts'

/**
 * Constraints made ready for choosing. Patterns that stay together form one unit, every other pattern that may run is a
 * unit of its own; units are numbered by their first pattern in file order. A choice takes whole units.
 */
export type ChoiceRules = {
  readonly nPatterns: number
  readonly nUnits: number
  /** CSR: the patterns of unit u, in the order in which they run, are `unitPatterns[unitStart[u]] …`. */
  readonly unitStart: Uint32Array
  readonly unitPatterns: Uint32Array
  /** Length nPatterns: the unit of each pattern, −1 where it is left out. */
  readonly unitOf: Int32Array
  /** Length nUnits, 1 where every choice holds the unit: kept, first, or needed before such a unit. */
  readonly kept: Uint8Array
  /** Units fixed at the front, in their order. */
  readonly first: Uint32Array
  /** CSR: the units that must have run before unit u. Without cycles. */
  readonly predecessorStart: Uint32Array
  readonly predecessors: Uint32Array
}

/** A set of constraints that cannot hold together, in words that name the patterns, numbered from 1. */
export type Contradiction = {
  readonly message: string
  readonly hint: string
  /** The constraint to point at, such as the third pair of `before`. */
  readonly kind: ConstraintKind
  readonly index: number
}

export type RulesOrContradiction =
  | { readonly rules: ChoiceRules; readonly contradiction: null }
  | { readonly rules: null; readonly contradiction: Contradiction }

/** Returns the rules of a set without constraints: every pattern a unit of its own. */
export function freeRules(nPatterns: number): ChoiceRules {
  const { rules } = compileRules(NO_CONSTRAINTS, nPatterns)
  if (rules === null) throw new Error('no constraints cannot contradict')
  return rules
}

/**
 * Returns the rules that a set of constraints makes, or the first contradiction among them. Every pattern index must lie
 * in 0 … nPatterns − 1; readers see to that.
 */
export function compileRules(constraints: Constraints, nPatterns: number): RulesOrContradiction {
  const refuse = (
    kind: ConstraintKind,
    index: number,
    message: string,
    hint: string,
  ): RulesOrContradiction => ({
    rules: null,
    contradiction: { kind, index, message, hint },
  })

  const leftOut = new Uint8Array(nPatterns)
  for (const pattern of constraints.leaveOut) leftOut[pattern] = 1
  for (const kind of ['keep', 'first'] as const) {
    const index = constraints[kind].findIndex((pattern) => leftOut[pattern] === 1)
    if (index < 0) continue
    const words = kind === 'keep' ? 'is kept and left out' : 'runs first and is left out'
    return refuse(
      kind,
      index,
      `pattern ${constraints[kind][index] + 1} ${words}`,
      'Remove it from one of the two',
    )
  }

  const groupOf = new Int32Array(nPatterns).fill(-1)
  for (const [index, group] of constraints.together.entries()) {
    for (const pattern of group) {
      if (leftOut[pattern] === 1) {
        const other = group.find((one) => leftOut[one] === 0)
        const rest = other === undefined ? 'a group' : `pattern ${other + 1}`
        const hint = 'Leave the whole group out, or take the pattern out of the group'
        return refuse(
          'together',
          index,
          `pattern ${pattern + 1} stays together with ${rest} and is left out`,
          hint,
        )
      }
      if (groupOf[pattern] >= 0) {
        const where =
          groupOf[pattern] === index
            ? 'twice in one group that stays together'
            : 'in two groups that stay together'
        return refuse('together', index, `pattern ${pattern + 1} stands ${where}`, 'Join the groups into one')
      }
      groupOf[pattern] = index
    }
  }

  const before = new Map<number, number[]>()
  for (const [index, [a, b]] of constraints.before.entries()) {
    if (leftOut[a] === 1 || leftOut[b] === 1) {
      if (leftOut[b] === 1) continue
      const hint = `Leave pattern ${b + 1} out too, or remove the pair`
      return refuse('before', index, `pattern ${a + 1} runs before pattern ${b + 1} and is left out`, hint)
    }
    const list = before.get(b)
    if (list === undefined) before.set(b, [a])
    else list.push(a)
  }

  const placeInFirst = new Map<number, number>()
  for (const [index, pattern] of constraints.first.entries()) {
    if (placeInFirst.has(pattern)) {
      return refuse('first', index, `pattern ${pattern + 1} runs first in two places`, 'Name it once')
    }
    placeInFirst.set(pattern, index)
  }

  const { unitOf, unitStart, unitPatterns } = formUnits(nPatterns, leftOut, groupOf)
  const nUnits = unitStart.length - 1
  const predecessorSets = Array.from({ length: nUnits }, () => new Set<number>())
  for (const [b, list] of before) {
    for (const a of list) if (unitOf[a] !== unitOf[b]) predecessorSets[unitOf[b]].add(unitOf[a])
  }

  const cycle = findCycle(constraints, nPatterns, groupOf, leftOut)
  if (cycle !== null) {
    const index = cycle.pair
    return refuse('before', index, `these constraints go in a circle: ${cycle.words}`, 'Remove one of them')
  }
  sortInsideUnits(unitStart, unitPatterns, before, placeInFirst)

  const predecessorStart = new Uint32Array(nUnits + 1)
  for (let unit = 0; unit < nUnits; unit++)
    predecessorStart[unit + 1] = predecessorStart[unit] + predecessorSets[unit].size
  const predecessors = new Uint32Array(predecessorStart[nUnits])
  for (let unit = 0; unit < nUnits; unit++)
    predecessors.set([...predecessorSets[unit]], predecessorStart[unit])

  const first: number[] = []
  for (let at = 0; at < constraints.first.length;) {
    const unit = unitOf[constraints.first[at]]
    for (
      let member = unitStart[unit];
      member < unitStart[unit + 1] && at < constraints.first.length;
      member++, at++
    ) {
      if (unitPatterns[member] === constraints.first[at]) continue
      const wanted = constraints.first[at] + 1
      const hint = 'A group that stays together fills the places after its first pattern'
      return refuse(
        'first',
        at,
        `pattern ${wanted} cannot run at place ${at + 1}: pattern ${unitPatterns[member] + 1} has to run there`,
        hint,
      )
    }
    const late = [...predecessorSets[unit]].find((one) => !first.includes(one))
    if (late !== undefined) {
      const index = at - 1
      const message = `pattern ${unitPatterns[unitStart[unit]] + 1} runs first, but pattern ${unitPatterns[unitStart[late]] + 1} has to run before it`
      return refuse('first', index, message, 'Name that one first too, or remove the pair from "before"')
    }
    first.push(unit)
  }

  const kept = new Uint8Array(nUnits)
  const waiting = [...constraints.keep.map((pattern) => unitOf[pattern]), ...first]
  for (let unit = waiting.pop(); unit !== undefined; unit = waiting.pop()) {
    if (kept[unit] === 1) continue
    kept[unit] = 1
    waiting.push(...predecessorSets[unit])
  }
  const rules = {
    nPatterns,
    nUnits,
    unitStart,
    unitPatterns,
    unitOf,
    kept,
    first: Uint32Array.from(first),
    predecessorStart,
    predecessors,
  }
  return { rules, contradiction: null }
}

function formUnits(
  nPatterns: number,
  leftOut: Uint8Array,
  groupOf: Int32Array,
): { unitOf: Int32Array; unitStart: Uint32Array; unitPatterns: Uint32Array } {
  const unitOf = new Int32Array(nPatterns).fill(-1)
  const unitOfGroup = new Map<number, number>()
  const sizes: number[] = []
  for (let pattern = 0; pattern < nPatterns; pattern++) {
    if (leftOut[pattern] === 1) continue
    const group = groupOf[pattern]
    let unit = group < 0 ? undefined : unitOfGroup.get(group)
    if (unit === undefined) {
      unit = sizes.length
      sizes.push(0)
      if (group >= 0) unitOfGroup.set(group, unit)
    }
    unitOf[pattern] = unit
    sizes[unit]++
  }
  const unitStart = new Uint32Array(sizes.length + 1)
  for (const [unit, size] of sizes.entries()) unitStart[unit + 1] = unitStart[unit] + size
  const unitPatterns = new Uint32Array(unitStart[sizes.length])
  const filled = unitStart.slice()
  for (let pattern = 0; pattern < nPatterns; pattern++) {
    if (unitOf[pattern] >= 0) unitPatterns[filled[unitOf[pattern]]++] = pattern
  }
  return { unitOf, unitStart, unitPatterns }
}

/** Puts each unit's patterns in the order in which they run: as fixed first, then as pairs demand, else in file order. */
function sortInsideUnits(
  unitStart: Uint32Array,
  unitPatterns: Uint32Array,
  before: ReadonlyMap<number, readonly number[]>,
  placeInFirst: ReadonlyMap<number, number>,
): void {
  for (let unit = 0; unit + 1 < unitStart.length; unit++) {
    if (unitStart[unit + 1] - unitStart[unit] === 1) continue
    const members = unitPatterns.subarray(unitStart[unit], unitStart[unit + 1])
    const waiting = [...members].sort(
      (a, b) => (placeInFirst.get(a) ?? Infinity) - (placeInFirst.get(b) ?? Infinity) || a - b,
    )
    for (let place = 0; place < members.length; place++) {
      const at = waiting.findIndex((one) => !(before.get(one) ?? []).some((a) => waiting.includes(a)))
      members[place] = waiting[at]
      waiting.splice(at, 1)
    }
  }
}

/**
 * Returns a circle among pairs and groups in words, with the place of its first pair in `before`, or null where there is
 * none. The nodes are patterns; a group's patterns count as one node, so that what runs between them shows as a circle.
 */
function findCycle(
  constraints: Constraints,
  nPatterns: number,
  groupOf: Int32Array,
  leftOut: Uint8Array,
): { words: string; pair: number } | null {
  const inside = circleAmong((pattern) => pattern)
  if (inside !== null) return inside
  return circleAmong((pattern) => (groupOf[pattern] < 0 ? pattern : nPatterns + groupOf[pattern]))

  function circleAmong(nodeOf: (pattern: number) => number): { words: string; pair: number } | null {
    const after = new Map<number, number[]>()
    for (const [index, [a, b]] of constraints.before.entries()) {
      if (leftOut[b] === 1 || (nodeOf(a) === nodeOf(b) && a !== b)) continue
      const list = after.get(nodeOf(a))
      if (list === undefined) after.set(nodeOf(a), [index])
      else list.push(index)
    }
    // Depth first with an explicit path of pairs; a node is open while it is on the path.
    const state = new Map<number, 'open' | 'done'>()
    for (const root of after.keys()) {
      if (state.has(root)) continue
      state.set(root, 'open')
      const path: number[] = []
      const stack = [{ node: root, next: 0 }]
      while (stack.length > 0) {
        const top = stack[stack.length - 1]
        const pair = after.get(top.node)?.[top.next++]
        if (pair === undefined) {
          state.set(top.node, 'done')
          stack.pop()
          path.pop()
          continue
        }
        const target = nodeOf(constraints.before[pair][1])
        if (state.get(target) === 'open') {
          const from = stack.findIndex(({ node }) => node === target)
          return inWords([...path.slice(from), pair])
        }
        if (state.has(target)) continue
        state.set(target, 'open')
        path.push(pair)
        stack.push({ node: target, next: 0 })
      }
    }
    return null
  }

  function inWords(pairs: readonly number[]): { words: string; pair: number } {
    const parts: string[] = []
    for (const [at, pair] of pairs.entries()) {
      const [a, b] = constraints.before[pair]
      const [next] = constraints.before[pairs[(at + 1) % pairs.length]]
      parts.push(`${a + 1} before ${b + 1}`)
      if (next !== b) parts.push(`${b + 1} together with ${next + 1}`)
    }
    return { words: parts.join(', '), pair: pairs[0] }
  }
}
