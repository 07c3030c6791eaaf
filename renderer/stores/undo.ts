import { defineStore } from 'pinia'
import { computed, shallowRef } from 'vue'
import { api } from '../api/client.ts'
import { useNotices } from './notices.ts'

type Deletion = {
  readonly label: string
  /** Deletes and returns the token that takes it back. */
  readonly delete: () => Promise<{ readonly undoToken: string }>
}

/** Something that can be taken back and done again. */
type Step = {
  readonly label: string
  /** Does it and returns what takes it back. */
  readonly act: () => Promise<() => Promise<unknown>>
}

type Done = Step & { readonly takeBack: () => Promise<unknown> }

/** What was deleted or changed and can be taken back, latest last, and what was taken back and can be done again. */
export const useUndo = defineStore('undo', () => {
  const notices = useNotices()
  const done = shallowRef<readonly Done[]>([])
  const undone = shallowRef<readonly Step[]>([])
  const undoLabel = computed(() => done.value.at(-1)?.label ?? null)
  const redoLabel = computed(() => undone.value.at(-1)?.label ?? null)

  async function remove(deletion: Deletion): Promise<boolean> {
    const isRemoved = await perform({
      label: deletion.label,
      act: async () => {
        const { undoToken } = await deletion.delete()
        return () => api.call('undo.restore', { undoToken })
      },
    })
    if (isRemoved) {
      notices.tell('idle', `${deletion.label} deleted`, '', { label: 'Undo', run: () => void undo() })
    }
    return isRemoved
  }

  /** Does something new; what was taken back before can't be done again then. */
  async function perform(step: Step): Promise<boolean> {
    const isDone = await carryOut(step)
    if (isDone) undone.value = []
    return isDone
  }

  async function undo(): Promise<void> {
    const last = done.value.at(-1)
    if (!last) return
    done.value = done.value.slice(0, -1)
    const isRestored = await notices.attempt(`${last.label} could not be brought back`, async () => {
      await last.takeBack()
      return true
    })
    if (isRestored) undone.value = [...undone.value, last]
  }

  async function redo(): Promise<void> {
    const last = undone.value.at(-1)
    if (!last) return
    undone.value = undone.value.slice(0, -1)
    await carryOut(last)
  }

  async function carryOut(step: Step): Promise<boolean> {
    const takeBack = await notices.attempt(`${step.label} was kept`, step.act)
    if (takeBack === undefined) return false
    done.value = [...done.value, { ...step, takeBack }]
    return true
  }

  /** Tokens hold while their project stays open. */
  function forget(): void {
    done.value = []
    undone.value = []
  }

  return { done, undone, undoLabel, redoLabel, remove, perform, undo, redo, forget }
})
