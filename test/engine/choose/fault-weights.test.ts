import { describe, expect, test } from 'vitest'
import { weighFaults } from '../../../app/engine/choose/fault-weights.ts'
import { blockOf, lossByBlock, lostFaults } from '../../../app/engine/choose/lost-faults.ts'
import { buildFaultList } from '../../../app/engine/faults/build-fault-list.ts'
import { faultName } from '../../../app/engine/faults/fault-list.ts'
import { readBench } from '../../../app/engine/formats/bench/read-bench.ts'
import { readWeights } from '../../../app/engine/formats/weights/read-weights.ts'
import { freeTask } from '../../helpers/detection-matrix.ts'
import { randomPatterns, runOf } from '../../helpers/random-run.ts'

const text = `INPUT(a)\nINPUT(b)\nOUTPUT(core/y)\ncore/alu/n1 = AND(a, b)\ncore/alu/n2 = NOT(core/alu/n1)\ncore/y = OR(core/alu/n2, a)\n`
const { value } = readBench({ name: 'blocks.bench', text })
if (value === null) throw new Error('the circuit is refused')
const { circuit } = value
const faults = buildFaultList(circuit)

function weigh(csv: string) {
  const rows = readWeights({ name: 'weights.csv', text: csv }).value
  if (rows === null) throw new Error('the weights are refused')
  const { ofFault, ofClass, total, diagnostics } = weighFaults(faults, rows, 'weights.csv')
  const named = Object.fromEntries(Array.from(ofFault, (weight, fault) => [faultName(faults, fault), weight]))
  return { named, ofClass, total, diagnostics }
}

describe('weights', () => {
  test('of a block hold for all under it, a longer block and a fault win', () => {
    const { named, ofClass, total } = weigh('core,3\ncore/alu,2\ncore/alu/n2/1,10\n')
    expect(named).toMatchObject({
      'a/0': 1,
      'core/y/0': 3,
      'core/alu/n1/1': 2,
      'core/alu/n2/0': 2,
      'core/alu/n2/1': 10,
    })
    expect(total).toBe(Object.values(named).reduce((sum, weight) => sum + weight, 0))
    expect(ofClass.reduce((sum, weight) => sum + weight, 0)).toBe(total)
  })

  test('of a name that is no block hold for all names that begin with it', () => {
    const { named, diagnostics } = weigh('core/alu/n,4\nb,0\n')
    expect(named).toMatchObject({ 'core/alu/n1/0': 4, 'core/alu/n2/1': 4, 'core/y/0': 1, 'b/0': 0 })
    expect(diagnostics).toEqual([])
  })

  test('of a name that nothing has are warned of', () => {
    const { diagnostics } = weigh('core/alv,4\n')
    expect(diagnostics).toMatchObject([
      {
        code: 'unknown-name',
        severity: 'warning',
        span: { start: 0, end: 10 },
        hint: 'Did you mean "core/alu"?',
      },
    ])
  })
})

test('a block is the hierarchy in front of a name', () => {
  expect(['core/alu/u3.A/0', 'n7>core/x.1/0', 'core/n7>x.1/1', 'n7/0'].map(blockOf)).toEqual([
    'core/alu',
    '',
    'core',
    '',
  ])
})

test('what a cut loses is told by block and adds up', () => {
  const run = runOf(circuit, randomPatterns(circuit, 4, 2))
  const task = freeTask(run.matrix, { weights: run.weights })
  const blocks = lossByBlock(task, faults, [0])
  const lost = lostFaults(task, [0]).weight.reduce((sum, weight) => sum + weight, 0)
  expect(blocks.map(({ block }) => block)).toEqual(
    ['', 'core', 'core/alu'].filter((name) => blocks.some(({ block }) => block === name)),
  )
  expect(blocks.reduce((sum, { faults: count }) => sum + count, 0)).toBe(faults.nFaults)
  expect(blocks.reduce((sum, { lost: count }) => sum + count, 0)).toBe(lost)
})
