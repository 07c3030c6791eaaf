import { defineStore } from 'pinia'
import { ref } from 'vue'
import { AppError } from '../../app/contract/errors.ts'

export type Notice = {
  readonly id: number
  readonly kind: 'good' | 'caution' | 'bad' | 'idle'
  readonly title: string
  readonly text: string
  readonly action: { readonly label: string; readonly run: () => void } | null
}

const SHOWN_MS = 12_000

/** What ended elsewhere or can be taken back: told at the lower right until read or for a while; errors stay. */
export const useNotices = defineStore('notices', () => {
  const notices = ref<readonly Notice[]>([])
  let lastId = 0

  function tell(
    kind: Notice['kind'],
    title: string,
    text = '',
    action: { label: string; run: () => void } | null = null,
  ): void {
    lastId += 1
    const id = lastId
    notices.value = [...notices.value, { id, kind, title, text, action }].slice(-4)
    if (kind !== 'bad') setTimeout(() => dismiss(id), SHOWN_MS)
  }

  function dismiss(id: number): void {
    notices.value = notices.value.filter((notice) => notice.id !== id)
  }

  /** Does something that may be refused, and tells why where it is. Returns undefined then. */
  async function attempt<T>(title: string, work: () => Promise<T>): Promise<T | undefined> {
    try {
      return await work()
    } catch (error) {
      if (!(error instanceof AppError)) throw error
      if (error.code !== 'cancelled') tell('bad', title, error.message)
      return undefined
    }
  }

  return { notices, tell, dismiss, attempt }
})
