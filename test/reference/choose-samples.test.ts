import { describe, expect, test } from 'vitest'
import { drawSample, drawTwoSamples, type FaultSample } from '../../app/engine/choose/fault-sample.ts'
import { wilsonEstimate } from '../../app/engine/choose/wilson.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import { hasData, readData } from '../helpers/data.ts'
import { randomRun } from '../helpers/random-run.ts'

// Source: the coverage of the full list on the same patterns. Limits at z = 3 hold it 99.7 times in a hundred; asked here
// are 38 of 40, on a circuit whose coverage is far from all and one where it is near.
describe.skipIf(!hasData).each([
  ['c880', 12],
  ['c499', 300],
])('samples of 300 faults of %s under %d random patterns', (name, nPatterns) => {
  const run = hasData ? randomRun(readData(`circuits/iscas85/${name}.bench`), nPatterns, 4) : null
  const isDetected = (group: number): boolean => run?.matrix.classOfRow.includes(group) ?? false
  const detectedOf = ({ classes, drawn }: FaultSample): number =>
    classes.reduce((sum, group, at) => sum + (isDetected(group) ? drawn[at] : 0), 0)

  test('hold the coverage of the full list between their limits at least 38 of 40 times', () => {
    if (run === null) throw new Error('no data')
    const { faults, weights } = run
    const coverage = weights.reduce((sum, weight) => sum + weight, 0) / faults.nFaults
    let held = 0
    for (let seed = 1; seed <= 40; seed++) {
      const { quote } = drawTwoSamples(faults, 300, createRandom(seed))
      const { low, high } = wilsonEstimate(detectedOf(quote), quote.size, faults.nFaults)
      if (low <= coverage && coverage <= high) held++
    }
    expect(held).toBeGreaterThanOrEqual(38)
  })

  test('have no fault in common, and one over the whole list is exact', () => {
    if (run === null) throw new Error('no data')
    const { faults, weights } = run
    const { choose, quote } = drawTwoSamples(faults, 300, createRandom(7))
    const times = new Uint32Array(faults.nClasses)
    for (const sample of [choose, quote]) {
      expect(sample.size).toBe(300)
      for (const [at, group] of sample.classes.entries()) times[group] += sample.drawn[at]
    }
    expect([...times.keys()].every((group) => times[group] <= faults.classSize[group])).toBe(true)
    const whole = drawSample(faults, 1e9, createRandom(1))
    expect(whole.size).toBe(faults.nFaults)
    expect(detectedOf(whole)).toBe(weights.reduce((sum, weight) => sum + weight, 0))
  })
})
