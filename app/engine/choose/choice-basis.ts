import type { Netlist } from '../circuit/netlist.ts'
import type { FaultList } from '../faults/fault-list.ts'
import { readConstraints, type ReadConstraints } from '../formats/constraints/read-constraints.ts'
import { readWeights } from '../formats/weights/read-weights.ts'
import type { DetectionMatrix } from '../simulate/detection-profile.ts'
import type { Diagnostic, Reading } from '../source/diagnostic.ts'
import type { Source } from '../source/source.ts'
import type { ScanFacts } from '../tester/time-model.ts'
import { type ChoiceRules, compileRules, freeRules } from './choice-rules.ts'
import type { ChoiceTask } from './choice-task.ts'
import { NO_CONSTRAINTS } from './constraints.ts'
import { weighFaults } from './fault-weights.ts'
import type { Order } from './order.ts'
import { steepestFirst } from './steepest-first.ts'

/** What patterns are chosen from and by. */
export type ChoiceBasis = {
  readonly task: ChoiceTask
  /** The weight of all faults of the base. */
  readonly total: number
  /** Null where there are none. */
  readonly constraints: ReadConstraints | null
}

export type BasisInput = {
  readonly faults: FaultList
  readonly matrix: DetectionMatrix
  /** Length nPatterns: tester cycles of each pattern. */
  readonly costs: Float64Array
  readonly constraints: Source | null
  readonly weights: Source | null
  readonly detections: number
  /** Length nClasses: how many faults each class stands for, where the matrix holds a sample. Absent: all that it has. */
  readonly standsFor?: Float64Array
}

/** Returns the choice that constraints and weights make of a run; codes are those of their readers. */
export function choiceBasis(input: BasisInput): Reading<ChoiceBasis> {
  const { faults, matrix, costs, detections } = input
  const diagnostics: Diagnostic[] = []
  const take = <T>(reading: Reading<T>): T | null => {
    diagnostics.push(...reading.diagnostics)
    return reading.value
  }
  const constraints =
    input.constraints === null ? null : take(readConstraints(input.constraints, matrix.nPatterns))
  const rows = input.weights === null ? null : take(readWeights(input.weights))
  if ((input.constraints !== null && constraints === null) || (input.weights !== null && rows === null)) {
    return { value: null, diagnostics }
  }
  const weighed =
    rows === null || input.weights === null ? null : weighFaults(faults, rows, input.weights.name)
  diagnostics.push(...(weighed?.diagnostics ?? []))
  const { standsFor } = input
  const ofClass =
    weighed === null
      ? (standsFor ?? faults.classSize)
      : standsFor === undefined
        ? weighed.ofClass
        : standsFor.map((count, group) => (count * weighed.ofClass[group]) / faults.classSize[group])
  const task: ChoiceTask = {
    matrix,
    weights: Float64Array.from(matrix.classOfRow, (group) => ofClass[group]),
    costs,
    rules: constraints?.rules ?? freeRules(matrix.nPatterns),
    detections,
  }
  return { value: { task, total: weighed?.total ?? faults.nFaults, constraints }, diagnostics }
}

/** Returns what a netlist says about scan. */
export function scanFactsOf({ circuit, chains }: Netlist): ScanFacts {
  const longest = chains.reduce((most, { cells }) => Math.max(most, cells.length), 0)
  return {
    flipFlops: circuit.flipFlops.length,
    tracedChains: chains.length > 0 ? chains.length : null,
    tracedLongest: chains.length > 0 ? longest : null,
  }
}

/** Returns the rules of a choice under which these patterns, a choice that its rules allow, are kept as well. */
export function rulesKeeping({ task, constraints }: ChoiceBasis, patterns: ArrayLike<number>): ChoiceRules {
  const given = constraints?.constraints ?? NO_CONSTRAINTS
  const keep = [...given.keep, ...Array.from(patterns)]
  const { rules } = compileRules({ ...given, keep }, task.matrix.nPatterns)
  if (rules === null) throw new Error('the patterns are no choice that the constraints allow')
  return rules
}

/**
 * Returns the order that runs the given patterns steepest first and everything else after them, in file order. The patterns
 * make a choice that the rules allow, as a smallest complete set does.
 */
export function orderOfChoice({ task, constraints }: ChoiceBasis, patterns: ArrayLike<number>): Order {
  const { nPatterns } = task.matrix
  const isChosen = new Uint8Array(nPatterns)
  for (let at = 0; at < patterns.length; at++) isChosen[patterns[at]] = 1
  const others = Array.from(isChosen.keys()).filter((pattern) => isChosen[pattern] === 0)
  const asked = constraints?.constraints ?? NO_CONSTRAINTS
  const { rules } = compileRules(
    {
      ...asked,
      keep: Array.from(patterns),
      leaveOut: others,
      together: asked.together.filter((group) => group.every((pattern) => isChosen[pattern] === 1)),
      before: asked.before.filter(([a, b]) => isChosen[a] === 1 && isChosen[b] === 1),
    },
    nPatterns,
  )
  const within = rules === null ? null : steepestFirst({ ...task, rules })
  if (within === null) throw new Error('the patterns are no choice that the constraints allow')
  const chosen = within.sequence.subarray(0, patterns.length)
  return behindChosen(task, chosen)
}

function behindChosen({ rules }: ChoiceTask, chosen: ArrayLike<number>): Order {
  const { nPatterns, unitOf } = rules
  const sequence = new Uint32Array(nPatterns)
  const isPlaced = new Uint8Array(nPatterns)
  let length = 0
  const place = (pattern: number): void => {
    isPlaced[pattern] = 1
    sequence[length++] = pattern
  }
  for (let at = 0; at < chosen.length; at++) place(chosen[at])
  for (let pattern = 0; pattern < nPatterns; pattern++) {
    if (isPlaced[pattern] === 0 && unitOf[pattern] >= 0) place(pattern)
  }
  const runs = length
  for (let pattern = 0; pattern < nPatterns; pattern++) if (isPlaced[pattern] === 0) place(pattern)
  return { name: 'smallest', sequence, chosen: chosen.length, runs }
}
