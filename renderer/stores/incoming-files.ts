import { defineStore } from 'pinia'
import { shallowRef } from 'vue'

/** Files that were dropped on the window or chosen elsewhere, until the Import screen takes them. */
export const useIncomingFiles = defineStore('incoming-files', () => {
  const files = shallowRef<readonly File[]>([])

  function bring(more: readonly File[]): void {
    files.value = [...files.value, ...more]
  }

  /** Returns what waits, which then waits no more. */
  function take(): readonly File[] {
    const waiting = files.value
    files.value = []
    return waiting
  }

  return { files, bring, take }
})
