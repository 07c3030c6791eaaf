import { defineStore } from 'pinia'
import { shallowRef } from 'vue'

/** Returns a file's name without its endings, as a name for what is made of it. */
export function stemOf(fileName: string): string {
  return fileName.replace(/(\.[a-z]+)+$/i, '') || fileName
}

/** Returns a name that is not taken: the wanted one, or with the next free number behind it. */
export function freeName(wanted: string, taken: readonly string[]): string {
  let name = wanted
  for (let number = 2; taken.includes(name); number += 1) name = `${wanted} ${number}`
  return name
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
