import { defineStore } from 'pinia'
import { computed, ref, shallowRef } from 'vue'
import type { OutputOf } from '../../app/contract/operations.ts'
import type { Project, RecentProject } from '../../app/contract/shapes/project.ts'
import { api } from '../api/client.ts'
import { useCutSubject } from './cut-subject.ts'
import { useUndo } from './undo.ts'

/** The open project, and those that were open before. */
export const useProject = defineStore('project', () => {
  const subjects = useCutSubject()
  const undo = useUndo()
  const project = shallowRef<Project | null>(null)
  const recents = shallowRef<readonly RecentProject[]>([])
  const info = shallowRef<OutputOf<'app.info'> | null>(null)
  const isReachable = ref(true)
  const products = computed(() => project.value?.products ?? [])
  const isReadOnly = computed(() => project.value?.readOnly ?? false)

  /** Shows a project; what was remembered of another one is forgotten. */
  function show(next: Project | null): void {
    if (next?.path !== project.value?.path) {
      subjects.forget()
      undo.forget()
    }
    project.value = next
  }

  async function load(): Promise<void> {
    show((await api.call('projects.current', {})).project)
  }

  async function loadRecents(): Promise<void> {
    recents.value = (await api.call('projects.recent', {})).projects
  }

  async function loadInfo(): Promise<void> {
    info.value = await api.call('app.info', {})
  }

  async function create(name: string, folder: string): Promise<void> {
    show(await api.call('projects.create', folder === '' ? { name } : { name, folder }))
  }

  async function open(path: string): Promise<void> {
    show(await api.call('projects.open', { path }))
  }

  async function openDemo(): Promise<void> {
    show(await api.call('projects.openDemo', {}))
  }

  async function close(): Promise<void> {
    await api.call('projects.close', {})
    show(null)
  }

  async function forget(path: string): Promise<void> {
    await api.call('projects.forget', { path })
    await loadRecents()
  }

  return {
    project,
    recents,
    info,
    isReachable,
    products,
    isReadOnly,
    load,
    loadRecents,
    loadInfo,
    create,
    open,
    openDemo,
    close,
    forget,
  }
})
