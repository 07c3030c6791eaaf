import { expect, test } from 'vitest'
import { ceilingOf, patternBudgets } from '../../../app/engine/choose/ceiling.ts'
import { curveOf } from '../../../app/engine/choose/coverage-curve.ts'
import { detectedWeight } from '../../../app/engine/choose/detected-weight.ts'
import { smallestCompleteSet } from '../../../app/engine/choose/smallest-complete-set.ts'
import { steepestFirst } from '../../../app/engine/choose/steepest-first.ts'
import { readBench } from '../../../app/engine/formats/bench/read-bench.ts'
import { emptyPlane, type PatternSet, setBit } from '../../../app/engine/simulate/pattern-set.ts'
import { freeTask } from '../../helpers/detection-matrix.ts'
import { runOf } from '../../helpers/random-run.ts'

const text = 'INPUT(a)\nINPUT(b)\nOUTPUT(y)\ny = NAND(a, b)\n'
const { value } = readBench({ name: 'nand.bench', text })
if (value === null) throw new Error('the circuit is refused')

/** Patterns as pairs of input bits, a first. */
function taskFor(patterns: readonly string[]) {
  if (value === null) throw new Error('the circuit is refused')
  const plane = emptyPlane(2, patterns.length)
  for (const [at, bits] of patterns.entries()) {
    for (const [row, bit] of [...bits].entries()) if (bit === '1') setBit(plane, row, at)
  }
  const bursts = [{ name: 'all', first: 0, count: patterns.length }]
  const set: PatternSet = {
    nPatterns: patterns.length,
    value: plane,
    unknown: null,
    expected: null,
    observed: null,
    cycles: null,
    timeOnly: null,
    bursts,
  }
  const run = runOf(value.circuit, set)
  return { run, task: freeTask(run.matrix, { weights: run.weights }) }
}

// Source: domain.md's check values of a two-input NAND (common practice, no source); each can be worked out on paper.
test('a NAND has six faults; 01, 11, 10 detect them all and no two patterns do', () => {
  const { run, task } = taskFor(['00', '01', '10', '11'])
  expect(run.faults.nFaults).toBe(6)
  expect(detectedWeight(task, [1, 3, 2])).toBe(6)
  expect(detectedWeight(task, [3, 1])).toBe(5)
  expect(detectedWeight(task, [3, 0])).toBe(4)
  expect(smallestCompleteSet(task)).toEqual({
    patterns: Uint32Array.of(1, 2, 3),
    cost: 3,
    lowerBound: 3,
    proven: true,
  })
  expect([...(ceilingOf(task, patternBudgets(4))?.bounds ?? [])]).toEqual([3, 5, 6, 6])
})

test('steepest first begins with 11, whose three faults are the most, and leaves 00 for last', () => {
  const { task } = taskFor(['00', '01', '10', '11'])
  const order = steepestFirst(task)
  if (order === null) throw new Error('nothing asked the order to end')
  expect(order).toEqual({ name: 'steepest', sequence: Uint32Array.of(3, 1, 2, 0), chosen: 3, runs: 4 })
  expect([...curveOf(task, order, 6).detected]).toEqual([0, 3, 5, 6, 6])
})
