import { describe, expect, it } from 'vitest'
import { compareAtCuts } from '../../../app/engine/compare/compare-at-cuts.ts'
import { compareDetections, type ComparedRun } from '../../../app/engine/compare/compare-detections.ts'
import { buildFaultList } from '../../../app/engine/faults/build-fault-list.ts'
import { faultName } from '../../../app/engine/faults/fault-list.ts'
import { readBench } from '../../../app/engine/formats/bench/read-bench.ts'

/** A run on a netlist that detects, in its only pattern, the classes of the named faults. */
function runOf(text: string, detected: readonly string[]): ComparedRun {
  const faults = buildFaultList(readBench({ name: 'x.bench', text }).value!.circuit)
  const detections = new Uint32Array(faults.nClasses)
  for (let fault = 0; fault < faults.nFaults; fault++) {
    if (detected.includes(faultName(faults, fault))) detections[faults.classOf[fault]] = 1
  }
  const first = Int32Array.from(detections, (count) => (count > 0 ? 0 : -1))
  const possibly = new Uint8Array(faults.nClasses)
  const profile = { nClasses: faults.nClasses, nPatterns: 1, detectionLimit: 1, first, detections, possibly }
  return { faults, profile }
}

const NAND = 'INPUT(a)\nINPUT(b)\nOUTPUT(y)\ny = NAND(a, b)\n'
const NAND_OF_THREE = 'INPUT(a)\nINPUT(b)\nINPUT(c)\nOUTPUT(y)\ny = NAND(a, b, c)\n'

describe('compareDetections', () => {
  it('counts equivalent faults each, on one netlist', () => {
    // By hand: a/0, b/0 and y/1 of a NAND are equivalent (rules on a gate, common practice, no source).
    const first = runOf(NAND, ['y/1', 'a/1'])
    const second = { ...first, profile: runOf(NAND, ['y/1', 'b/1']).profile }
    expect(compareDetections(first, second)).toEqual({
      both: 3,
      neither: 1,
      gained: ['b/1'],
      lost: ['a/1'],
      onlyInFirst: 0,
      onlyInSecond: 0,
    })
  })

  it('goes by name where the netlists differ', () => {
    const comparison = compareDetections(runOf(NAND, ['a/1']), runOf(NAND_OF_THREE, ['b/1']))
    expect(comparison).toMatchObject({ gained: ['b/1'], lost: ['a/1'], onlyInFirst: 0, onlyInSecond: 2 })
  })
})

describe('compareAtCuts', () => {
  it('takes the longest prefixes in equal time, the shortest of equal coverage', () => {
    const slow = {
      detected: Float64Array.of(0, 4, 8),
      cycles: Float64Array.of(0, 10, 20),
      milliseconds: Float64Array.of(0, 1, 2),
      total: 10,
    }
    const quick = {
      detected: Float64Array.of(0, 5, 8, 9),
      cycles: Float64Array.of(0, 5, 10, 15),
      milliseconds: Float64Array.of(0, 0.5, 1, 1.5),
      total: 10,
    }
    expect(compareAtCuts(slow, quick)).toMatchObject({
      equalTime: { first: { patterns: 1, detected: 4 }, second: { patterns: 3, detected: 9, coverage: 0.9 } },
      equalCoverage: { first: { patterns: 2, cycles: 20 }, second: { patterns: 2, cycles: 10 } },
    })
  })
})
