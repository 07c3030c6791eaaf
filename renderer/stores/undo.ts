import { defineStore } from 'pinia'
import { computed, ref } from 'vue'
import { api } from '../api/client.ts'
import { useNotices } from './notices.ts'

type Deletion = {
  readonly label: string
  /** Deletes and returns the token that takes it back. */
  readonly delete: () => Promise<{ readonly undoToken: string }>
}

/** What was deleted and can be taken back, latest last, and what was taken back and can be done again. */
export const useUndo = defineStore('undo', () => {
  const notices = useNotices()
  const done = ref<readonly (Deletion & { readonly undoToken: string })[]>([])
  const undone = ref<readonly Deletion[]>([])
  const undoLabel = computed(() => done.value.at(-1)?.label ?? null)
  const redoLabel = computed(() => undone.value.at(-1)?.label ?? null)

  async function remove(deletion: Deletion): Promise<boolean> {
    const isRemoved = await carryOut(deletion)
    if (isRemoved) {
      undone.value = []
      notices.tell('idle', `${deletion.label} deleted`, '', { label: 'Undo', run: () => void undo() })
    }
    return isRemoved
  }

  async function undo(): Promise<void> {
    const last = done.value.at(-1)
    if (!last) return
    done.value = done.value.slice(0, -1)
    const isRestored = await notices.attempt(`${last.label} could not be brought back`, async () => {
      await api.call('undo.restore', { undoToken: last.undoToken })
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

  async function carryOut(deletion: Deletion): Promise<boolean> {
    const answer = await notices.attempt(`${deletion.label} was kept`, deletion.delete)
    if (answer === undefined) return false
    done.value = [...done.value, { ...deletion, undoToken: answer.undoToken }]
    return true
  }

  /** Tokens hold while their project stays open. */
  function forget(): void {
    done.value = []
    undone.value = []
  }

  return { done, undone, undoLabel, redoLabel, remove, undo, redo, forget }
})
