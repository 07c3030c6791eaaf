import { buildPlan, type Plan, type PlanInput, type PlanOutcome } from '../../app/engine/choose/build-plan.ts'
import { compileRules } from '../../app/engine/choose/choice-rules.ts'
import type { ChoiceTask } from '../../app/engine/choose/choice-task.ts'
import { type Constraints, NO_CONSTRAINTS } from '../../app/engine/choose/constraints.ts'
import { steepestFirst } from '../../app/engine/choose/steepest-first.ts'
import { buildFaultList } from '../../app/engine/faults/build-fault-list.ts'
import type { FaultList } from '../../app/engine/faults/fault-list.ts'
import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import { DEFAULT_PRODUCT } from '../../app/engine/quality/product.ts'
import { emptyPlane, setBit } from '../../app/engine/simulate/pattern-set.ts'
import { simulateTwin } from '../../app/engine/simulate/twin.ts'
import { DEFAULT_TESTER } from '../../app/engine/tester/tester.ts'

const N_PATTERNS = 4
const BURSTS = [{ name: 'all', first: 0, count: N_PATTERNS }]

/** Returns the faults of one NAND gate `y` of `a` and `b`, and what the patterns 00, 01, 11, 10 detect. */
export function nandChoice(constraints: Partial<Constraints> = {}): { faults: FaultList; task: ChoiceTask } {
  const text = 'INPUT(a)\nINPUT(b)\nOUTPUT(y)\ny = NAND(a, b)\n'
  const { circuit } = readBench({ name: 'nand.bench', text }).value!
  const faults = buildFaultList(circuit)
  const value = emptyPlane(2, N_PATTERNS)
  for (const [pattern, bits] of ['00', '01', '11', '10'].entries()) {
    for (const row of [0, 1]) if (bits[row] === '1') setBit(value, row, pattern)
  }
  const unsaid = { unknown: null, expected: null, observed: null, cycles: null, timeOnly: null }
  const patterns = { ...unsaid, nPatterns: N_PATTERNS, value, bursts: BURSTS }
  const simulation = { circuit, faults, patterns, detectionLimit: 0, classes: null, wantMatrix: true }
  const matrix = simulateTwin(simulation)!.matrix!
  const task = {
    matrix,
    weights: Float64Array.from(matrix.classOfRow, (one) => faults.classSize[one]),
    costs: new Float64Array(N_PATTERNS).fill(1),
    rules: compileRules({ ...NO_CONSTRAINTS, ...constraints }, N_PATTERNS).rules!,
    detections: 1,
  }
  return { faults, task }
}

/** Returns the plan of that gate, steepest first, at 1 ms a vector and a yield of 0.5, with whatever is changed. */
export function planOfNand(changes: Changes = {}, constraints: Partial<Constraints> = {}): Plan {
  const { plan, problems } = outcomeOfNand(changes, constraints)
  if (plan === null) throw new Error(problems[0].message)
  return plan
}

type Changes = Partial<PlanInput> & { weights?: Float64Array }

/** Returns the same with whatever stands in the way of a plan. */
export function outcomeOfNand(
  { weights, ...changes }: Changes,
  constraints: Partial<Constraints> = {},
): PlanOutcome {
  const { faults, task: plainTask } = nandChoice(constraints)
  const task = { ...plainTask, weights: weights ?? plainTask.weights }
  return buildPlan({
    faults,
    untestable: null,
    total: faults.nFaults,
    order: steepestFirst(task)!,
    patterns: { nPatterns: N_PATTERNS, bursts: BURSTS, cycles: null },
    patternFile: 'nand.vec',
    scan: { flipFlops: 0, tracedChains: null, tracedLongest: null },
    tester: { ...DEFAULT_TESTER, vectorMHz: 0.001 },
    product: { ...DEFAULT_PRODUCT, yield: 0.5, residualDppm: 0 },
    program: [],
    limits: [],
    goals: [],
    ceiling: Float64Array.of(3, 5, 6, 6),
    ceilingWithin: () => null,
    smallest: null,
    task,
    ...changes,
  })
}
