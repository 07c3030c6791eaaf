import { flushPromises, mount } from '@vue/test-utils'
import { expect, test } from 'vitest'
import type { Run } from '../../../app/contract/shapes/run.ts'
import RunSoFar from '../../../renderer/components/budget/RunSoFar.vue'
import { fakeApi } from '../../helpers/fake-api.ts'

const run = (patternsDone: number, figures: Run['figures']): Run => ({
  id: 1,
  productId: 1,
  number: 1,
  netlistId: 1,
  patternSetId: 1,
  state: 'running',
  detectionLimit: 0,
  createdAtMs: 0,
  endedAtMs: null,
  patternsDone,
  patternsTotal: 4,
  progress: patternsDone / 4,
  seconds: 1,
  figures,
  reason: null,
  engine: '',
})
const FIGURES = {
  faults: 1000,
  collapsedFaults: 600,
  detected: 964,
  collapsedDetected: 580,
  possibly: 0,
  byChainTest: 0,
  coverage: 0.9641,
}

test('a run under way shows its curve as far as it has come, and asks again when it has come further', async () => {
  let curve: Float64Array | null = null
  const host = fakeApi({ 'runs.curve': () => ({ detected: curve }) })
  const wrapper = mount(RunSoFar, { props: { run: run(0, null) } })
  await flushPromises()
  expect(wrapper.text()).toContain('– of – faults so far')
  expect(wrapper.findAll('path').length).toBe(5)
  curve = Float64Array.of(0, 900, 964)
  await wrapper.setProps({ run: run(2, FIGURES) })
  await flushPromises()
  expect(host.asked.filter(({ name }) => name === 'runs.curve')).toHaveLength(2)
  expect(wrapper.text()).toContain('96.41 so far')
  // Half of the patterns are done: the line ends in the middle of the 720 units, 3.6 % below the top of 300.
  expect(wrapper.findAll('path').at(-1)?.attributes('d')).toMatch(/L360\.0 10\.8$/)
})
