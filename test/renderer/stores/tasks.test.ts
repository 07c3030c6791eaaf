import { beforeEach, expect, test } from 'vitest'
import type { Task } from '../../../app/contract/shapes/task.ts'
import { useNotices } from '../../../renderer/stores/notices.ts'
import { useTasks } from '../../../renderer/stores/tasks.ts'
import { fakeApi } from '../../helpers/fake-api.ts'

beforeEach(() => void fakeApi())

const task = (change: Partial<Task> = {}): Task => ({
  id: 'a',
  kind: 'run',
  title: 'Run 3',
  state: 'running',
  phase: 'Simulating',
  share: 0.5,
  secondsLeft: 4,
  rate: 1e6,
  startedAtMs: 1000,
  endedAtMs: null,
  message: null,
  runId: 3,
  canCancel: true,
  ...change,
})

test('a task moves from under way to ended, once', () => {
  const tasks = useTasks()
  tasks.take(task())
  tasks.take(task({ share: 0.9 }))
  expect(tasks.running.map(({ share }) => share)).toEqual([0.9])
  tasks.take(task({ state: 'done', endedAtMs: 9000 }))
  expect([tasks.running.length, tasks.ended.length]).toEqual([0, 1])
})

test('the end of long work is told once, a short one and a cancelled one are not', () => {
  const tasks = useTasks()
  const ended = { state: 'done', endedAtMs: 9000, message: '97.74 % detected' } as const
  tasks.take(task())
  tasks.take(task(ended))
  tasks.take(task(ended))
  tasks.take(task({ id: 'short', state: 'done', endedAtMs: 1500 }))
  tasks.take(task({ id: 'stopped', state: 'cancelled', endedAtMs: 9000 }))
  expect(useNotices().notices.map(({ title, text }) => [title, text])).toEqual([
    ['Run 3: done', '97.74 % detected'],
  ])
})

test('a failure is told with its reason', () => {
  useTasks().take(task({ state: 'failed', endedAtMs: 9000, message: 'No room on the disk.' }))
  expect(useNotices().notices[0]).toMatchObject({
    kind: 'bad',
    title: 'Run 3: broken off',
    text: 'No room on the disk.',
  })
})
