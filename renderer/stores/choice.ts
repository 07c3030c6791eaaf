import { defineStore } from 'pinia'
import type { Assumptions, OrderName } from '../../app/contract/shapes/budget.ts'
import { useBudget } from './budget.ts'
import { useCutSubject } from './cut-subject.ts'
import { useUndo } from './undo.ts'

type ChosenBy = Partial<Pick<Assumptions, 'constraints' | 'weights' | 'byHand'>>

/** Changes what patterns are chosen by: constraints, weights, an order by hand. Each change can be taken back. */
export const useChoice = defineStore('choice', () => {
  const budget = useBudget()
  const subjects = useCutSubject()
  const undo = useUndo()

  /** `shown`: the order and the cut that the change leads to. */
  async function change(
    label: string,
    to: ChosenBy,
    shown: { readonly order?: OrderName; readonly cut?: number } = {},
  ): Promise<void> {
    const { product, assumptions } = budget
    if (product === null || assumptions === null) return
    const isMoved = shown.order !== undefined || shown.cut !== undefined
    const before = isMoved ? { order: budget.order, cut: budget.cut } : {}
    const from: ChosenBy = Object.fromEntries(
      Object.keys(to).map((key) => [key, assumptions[key as keyof ChosenBy]]),
    )
    await undo.perform({
      label,
      act: async () => {
        apply(product.id, to, shown)
        return async () => apply(product.id, from, before)
      },
    })
  }

  function apply(
    productId: number,
    chosenBy: ChosenBy,
    shown: { readonly order?: OrderName; readonly cut?: number },
  ): void {
    if (budget.product?.id === productId) {
      budget.assume(chosenBy, shown)
      return
    }
    const subject = subjects.subjects.get(productId)
    if (!subject) return
    subjects.set(productId, {
      ...subject,
      ...shown,
      assumptions: { ...subject.assumptions, ...chosenBy },
    })
  }

  /** Moves a pattern to another position, both from 0, which makes the order one set by hand. */
  async function moveByHand(from: number, to: number, cut: number = budget.cut): Promise<void> {
    const list = Array.from(budget.columns?.pattern ?? [])
    const [moved] = list.splice(from, 1)
    if (moved === undefined || from === to) return
    list.splice(to, 0, moved)
    await change(`Pattern ${moved} moved`, { byHand: list }, { order: 'by-hand', cut })
  }

  return { change, moveByHand }
})
