import { defineStore } from 'pinia'
import { shallowRef } from 'vue'
import { AppError } from '../../app/contract/errors.ts'
import type { InputOf, OutputOf } from '../../app/contract/operations.ts'
import { api } from '../api/client.ts'

export type ProductState =
  | { readonly status: 'loading' }
  | { readonly status: 'ready'; readonly record: OutputOf<'products.get'> }
  | { readonly status: 'failed'; readonly message: string }

/** The product that is shown, with its revisions, runs and budgets. */
export const useProduct = defineStore('product', () => {
  const state = shallowRef<ProductState>({ status: 'loading' })
  let shown: number | null = null

  async function open(id: number): Promise<void> {
    if (shown !== id) state.value = { status: 'loading' }
    shown = id
    await reload()
  }

  async function reload(): Promise<void> {
    if (shown === null) return
    const id = shown
    try {
      const record = await api.call('products.get', { id })
      if (shown === id) state.value = { status: 'ready', record }
    } catch (error) {
      if (!(error instanceof AppError)) throw error
      if (shown === id) state.value = { status: 'failed', message: error.message }
    }
  }

  /** Returns what ends following the changes of the product that is shown. */
  function follow(): () => void {
    return api.on('changed', ({ productId }) => {
      if (productId === null || productId === shown) void reload()
    })
  }

  async function update(
    change: Omit<InputOf<'products.update'>, 'id'>,
  ): Promise<OutputOf<'products.update'> | null> {
    if (shown === null) return null
    const answer = await api.call('products.update', { id: shown, ...change })
    await reload()
    return answer
  }

  return { state, open, reload, follow, update }
})
