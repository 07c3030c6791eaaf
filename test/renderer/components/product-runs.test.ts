import { mount } from '@vue/test-utils'
import { beforeEach, expect, test } from 'vitest'
import type { OutputOf } from '../../../app/contract/operations.ts'
import type { Run } from '../../../app/contract/shapes/run.ts'
import ProductRuns from '../../../renderer/components/product/ProductRuns.vue'
import { useProject } from '../../../renderer/stores/project.ts'
import { useTasks } from '../../../renderer/stores/tasks.ts'
import { fakeApi, type FakeApi } from '../../helpers/fake-api.ts'

const figures = {
  faults: 1000,
  collapsedFaults: 600,
  detected: 964,
  collapsedDetected: 580,
  possibly: 0,
  byChainTest: 0,
  coverage: 0.964,
}
const run = (number: number, change: Partial<Run>): Run => ({
  id: number,
  productId: 1,
  number,
  netlistId: 1,
  patternSetId: 1,
  state: 'done',
  detectionLimit: 0,
  createdAtMs: 0,
  endedAtMs: null,
  patternsDone: 0,
  patternsTotal: 640,
  progress: 0,
  seconds: 14.2,
  figures: null,
  reason: null,
  engine: '',
  ...change,
})
const product = { id: 1, name: 'Fern', note: '', createdAtMs: 0, values: {}, testerId: null }
const record = (runs: Run[]) =>
  ({ product, netlists: [], patternSets: [], runs, budgets: [] }) as unknown as OutputOf<'products.get'>
const show = (runs: Run[]) => mount(ProductRuns, { props: { record: record(runs) } })

let host: FakeApi
beforeEach(() => {
  host = fakeApi({ 'runs.cancel': () => run(1, {}), 'runs.resume': () => run(1, {}) })
})

/** Each row's coverage, state and actions, by number of the run. */
function rows(runs: Run[]): Record<string, readonly string[]> {
  const found = show(runs)
    .findAll('tbody tr')
    .map((row) => {
      const cells = row.findAll('td').map((cell) => cell.text().replaceAll(/\s+/g, ' '))
      return [cells[0]!, [cells[5]!, cells[6]!, cells[7]!]] as const
    })
  return Object.fromEntries(found)
}

test('each state of a run says what it is, what was found and what can be done', () => {
  expect(
    rows([
      run(6, { state: 'queued' }),
      run(5, { state: 'running', progress: 0.479, figures }),
      run(4, { state: 'done', figures }),
      run(3, { state: 'cancelled', progress: 0.38, figures }),
      run(2, { state: 'interrupted', progress: 0.5, figures }),
      run(1, { state: 'failed', reason: 'No room on the disk.' }),
    ]),
  ).toEqual({
    6: ['–', 'Queued', 'Cancel'],
    5: ['96.40 so far', '47 %', 'Cancel'],
    4: ['96.40', 'Done, 14.2 s', 'Budget'],
    3: ['96.40 kept', 'Cancelled at 38 %', 'Resume'],
    2: ['96.40 kept', 'Broken off at 50 %', 'Resume'],
    1: ['–', 'Failed: No room on the disk.', 'Resume'],
  })
})

test("a running run shows its task's share and time left", () => {
  useTasks().take({
    id: 't',
    kind: 'run',
    title: 'Run 5',
    state: 'running',
    phase: 'Simulating',
    share: 0.6,
    secondsLeft: 68,
    rate: null,
    startedAtMs: 0,
    endedAtMs: null,
    message: null,
    runId: 5,
    canCancel: true,
  })
  const wrapper = show([run(5, { state: 'running', progress: 0.1 })])
  expect(wrapper.text().replaceAll('\u00a0', ' ')).toContain('60 %, 1:08 min left')
  expect(wrapper.get('[role=progressbar]').attributes('aria-valuenow')).toBe('60')
})

test('cancel and resume ask the host for that run', async () => {
  const wrapper = show([run(2, { state: 'running' }), run(1, { state: 'cancelled' })])
  await wrapper.get('[aria-label="Cancel run 2"]').trigger('click')
  await wrapper.get('[aria-label="Resume run 1"]').trigger('click')
  expect(host.asked).toEqual([
    { name: 'runs.cancel', input: { id: 2 } },
    { name: 'runs.resume', input: { id: 1 } },
  ])
})

test('a project that is open for reading only offers nothing that changes it', () => {
  useProject().project = { path: '', name: '', readOnly: true, notice: null, products: [], testers: 0 }
  const wrapper = show([run(2, { state: 'done', figures }), run(1, { state: 'cancelled' })])
  expect(wrapper.findAll('button')).toEqual([])
  expect(wrapper.get('a').text()).toBe('Budget')
})
