import { defineStore } from 'pinia'
import { shallowRef } from 'vue'
import type { RecentProject } from '../../app/contract/shapes/project.ts'
import type { Assumptions, OrderName } from '../../app/contract/shapes/budget.ts'

/** A cut that a report, an export or the list of lost faults is about. */
export type CutSubject = {
  readonly runId: number
  readonly order: OrderName
  readonly cut: number
  readonly assumptions: Assumptions
}

export type Dialog =
  | { readonly kind: 'commands' }
  | { readonly kind: 'shortcuts' }
  | { readonly kind: 'new-project' }
  /** `missing`: a project of the list whose file is no longer at its path. */
  | { readonly kind: 'open-project'; readonly missing?: RecentProject }
  | { readonly kind: 'new-product' }
  | { readonly kind: 'new-run'; readonly productId: number }
  | { readonly kind: 'export'; readonly productId: number; readonly subject: CutSubject }

/** The one dialog that may be open over the screens. */
export const useDialogs = defineStore('dialogs', () => {
  const open = shallowRef<Dialog | null>(null)

  function show(dialog: Dialog): void {
    open.value = dialog
  }

  function close(): void {
    open.value = null
  }

  return { open, show, close }
})
