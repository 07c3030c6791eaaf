import { expect, test } from 'vitest'
import type { Task } from '../../app/contract/shapes/task.ts'
import { createEventHub } from '../../app/services/event-hub.ts'
import { createTasks } from '../../app/services/tasks.ts'

test('a task tells what has come of it so far, and how it ended', async () => {
  const events = createEventHub()
  const told: Task[] = []
  events.subscribe(({ name, payload }) => {
    if (name === 'task') told.push(payload as Task)
  })
  let nowMs = 0
  const tasks = createTasks(events, () => nowMs)
  const end = await tasks.run(
    { kind: 'run', title: 'Run 1' },
    async ({ report }) => {
      nowMs = 1000
      report({ phase: 'Simulating', share: 0.5, soFar: '96.41 % so far' })
      return 7
    },
    (result) => ({ failed: `${result} errors` }),
  )
  expect(end).toBe(7)
  expect(told.map(({ state, message }) => [state, message])).toEqual([
    ['queued', null],
    ['running', null],
    ['running', '96.41 % so far'],
    ['failed', '7 errors'],
  ])
})
