import { defineStore } from 'pinia'
import { computed, shallowRef } from 'vue'
import type { Task } from '../../app/contract/shapes/task.ts'
import { api } from '../api/client.ts'
import { useNotices } from './notices.ts'

/** From this length on, work that ends is told of wherever one is. */
const LONG_MS = 3_000

/** All long work: what runs, what waits, what ended since the start. */
export const useTasks = defineStore('tasks', () => {
  const notices = useNotices()
  const tasks = shallowRef<readonly Task[]>([])
  const running = computed(() => tasks.value.filter(({ state }) => state === 'running' || state === 'queued'))
  const ended = computed(() => tasks.value.filter(({ state }) => state !== 'running' && state !== 'queued'))

  async function load(): Promise<void> {
    tasks.value = (await api.call('tasks.list', {})).tasks
  }

  /** Takes in what the host tells of a task. */
  function take(task: Task): void {
    const before = tasks.value.find(({ id }) => id === task.id)
    tasks.value = before
      ? tasks.value.map((known) => (known.id === task.id ? task : known))
      : [task, ...tasks.value]
    const isEnd = task.endedAtMs !== null && before?.endedAtMs !== task.endedAtMs
    if (isEnd && (task.endedAtMs ?? 0) - task.startedAtMs >= LONG_MS) tellEnd(task)
  }

  function tellEnd(task: Task): void {
    if (task.state === 'done') notices.tell('good', `${task.title}: done`, task.message ?? '')
    if (task.state === 'failed')
      notices.tell(
        'bad',
        `${task.title}: ${task.kind === 'import' ? 'has errors' : 'broken off'}`,
        task.message ?? '',
      )
  }

  async function cancel(id: string): Promise<void> {
    await notices.attempt('It could not be cancelled', () => api.call('tasks.cancel', { id }))
  }

  return { tasks, running, ended, load, take, cancel }
})
