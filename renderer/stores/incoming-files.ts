import { defineStore } from 'pinia'
import { shallowRef } from 'vue'

/** Returns a file's name without its endings, as a name for what is made of it. */
export function stemOf(fileName: string): string {
  return fileName.replace(/(\.[a-z]+)+$/i, '') || fileName
}

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
